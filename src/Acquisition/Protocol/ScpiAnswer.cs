using System.Globalization;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>Reads an answer of one value, or the chosen one of several separated by commas (IEEE 488.2, response data elements).</summary>
/// <param name="field">Which, counted from 1; 0 says that an answer is one value, and one of several is refused.</param>
internal sealed class ScpiAnswer(int field) : IValueReader
{
    public MeterValue Read(ReadOnlySpan<byte> line)
    {
        if (field == 0)
        {
            return line.Contains((byte)',')
                ? MeterValue.Refused(GapReason.NotANumber, $"{Excerpt.Of(line)} is more than one value; set protocol.field to say which is meant")
                : ScpiNumber.Read(line);
        }

        var at = 1;
        foreach (var part in line.Split((byte)','))
        {
            if (at++ == field)
            {
                return ScpiNumber.Read(line[part]);
            }
        }

        return MeterValue.Refused(GapReason.NotANumber,
            string.Create(CultureInfo.InvariantCulture, $"{Excerpt.Of(line)} has {at - 1} values and protocol.field asks for number {field}"));
    }
}
