namespace Lampwarden.Acquisition.Protocol;

/// <summary>Reads one meter's value out of a line. Not thread-safe.</summary>
internal interface IValueReader
{
    /// <summary>What the line says; never throws, whatever the bytes.</summary>
    MeterValue Read(ReadOnlySpan<byte> line);
}
