using System.Buffers.Binary;
using System.Numerics;

namespace Lampwarden.Host.Recording.Packing;

/// <summary>
/// A stretch of a run's stream as bytes: format, check sum (CRC-32C), then times, amps and, where measured, mains volts.
/// The same form serves the few readings of one commit and the thousands of a full chunk. Lossless.
/// </summary>
internal static class ReadingChunk
{
    private const byte Format = 1;
    private const int Head = 5;

    public static byte[] Pack(ReadOnlySpan<LineReading> readings)
    {
        var count = readings.Length;
        var times = new long[count];
        var numbers = new double[count];
        var decimals = new int[count];
        var hasVolts = false;
        var period = MiddlePeriod(readings);
        for (var i = 0; i < count; i++)
        {
            times[i] = readings[i].Milliseconds - (i * period);
            hasVolts |= !double.IsNaN(readings[i].MainsVolts);
        }

        var writer = new BitWriter();
        writer.Write(Format, 8);
        writer.Write(0, 32);
        writer.WriteNumber(count);
        writer.Write(hasVolts ? 1UL : 0, 1);
        writer.WriteNumber(period);
        IntegerColumn.Write(writer, times);
        for (var i = 0; i < count; i++)
        {
            (numbers[i], decimals[i]) = (readings[i].Amps, readings[i].Decimals);
        }

        NumberColumn.Write(writer, numbers, decimals);
        if (hasVolts)
        {
            for (var i = 0; i < count; i++)
            {
                (numbers[i], decimals[i]) = (readings[i].MainsVolts, readings[i].VoltsDecimals);
            }

            NumberColumn.Write(writer, numbers, decimals);
        }

        var bytes = writer.ToArray();
        BinaryPrimitives.WriteUInt32BigEndian(bytes.AsSpan(1), CheckSum(bytes.AsSpan(Head)));
        return bytes;
    }

    /// <summary>The readings of a chunk.</summary>
    /// <exception cref="InvalidDataException">The bytes are not those that were written.</exception>
    public static LineReading[] Unpack(ReadOnlySpan<byte> bytes)
    {
        if (bytes.Length < Head || bytes[0] != Format)
        {
            throw new InvalidDataException(bytes.IsEmpty ? "the chunk is empty" : $"format {bytes[0]} of the chunk is unknown");
        }

        if (BinaryPrimitives.ReadUInt32BigEndian(bytes[1..]) != CheckSum(bytes[Head..]))
        {
            throw new InvalidDataException("the chunk's check sum does not fit its bytes");
        }

        var reader = new BitReader(bytes[Head..]);
        var count = (int)reader.ReadNumber();
        var hasVolts = reader.Read(1) == 1;
        var period = reader.ReadNumber();
        var times = new long[count];
        IntegerColumn.Read(ref reader, times);
        var (amps, ampsDecimals) = (new double[count], new int[count]);
        NumberColumn.Read(ref reader, amps, ampsDecimals);
        var (volts, voltsDecimals) = (new double[count], new int[count]);
        Array.Fill(volts, double.NaN);
        if (hasVolts)
        {
            NumberColumn.Read(ref reader, volts, voltsDecimals);
        }

        var readings = new LineReading[count];
        for (var i = 0; i < count; i++)
        {
            readings[i] = LineReading.Stored(times[i] + (i * period), amps[i], ampsDecimals[i], volts[i], voltsDecimals[i]);
        }

        return readings;
    }

    // Polls fall on a grid with some jitter. Taking the grid off leaves the jitter alone; the median is not led astray by gaps.
    private static long MiddlePeriod(ReadOnlySpan<LineReading> readings)
    {
        if (readings.Length < 2)
        {
            return 0;
        }

        var steps = new long[readings.Length - 1];
        for (var i = 0; i < steps.Length; i++)
        {
            steps[i] = readings[i + 1].Milliseconds - readings[i].Milliseconds;
        }

        Array.Sort(steps);
        return steps[steps.Length / 2];
    }

    internal static uint CheckSum(ReadOnlySpan<byte> bytes)
    {
        var sum = uint.MaxValue;
        while (bytes.Length >= 8)
        {
            sum = BitOperations.Crc32C(sum, BinaryPrimitives.ReadUInt64LittleEndian(bytes));
            bytes = bytes[8..];
        }

        foreach (var value in bytes)
        {
            sum = BitOperations.Crc32C(sum, value);
        }

        return ~sum;
    }
}
