using System.Runtime.InteropServices;

namespace Lampwarden.Host.Recording.Packing;

/// <summary>
/// One quantity of a chunk: for every entry what it is (decimal places as sent, missing, overload, raw double), and the
/// decimal as a whole number at the chunk's most decimal places. Page docs/record.md describes the bits: keep it in step.
/// </summary>
internal static class NumberColumn
{
    private const int Overload = 16;
    private const int Missing = 17;

    // A double as it is: 18 where no decimal places hold it, 19 + d where it has d but is too large to be scaled with its neighbours.
    private const int Raw = 18;
    private const double LargestScaled = 1L << 53;

    public static void Write(BitWriter writer, ReadOnlySpan<double> values, ReadOnlySpan<int> decimals)
    {
        var most = 0;
        for (var i = 0; i < values.Length; i++)
        {
            most = double.IsFinite(values[i]) ? Math.Max(most, decimals[i]) : most;
        }

        var kinds = new long[values.Length];
        var scaled = new long[values.Length];
        var raw = new List<double>();
        for (var i = 0; i < values.Length; i++)
        {
            kinds[i] = Kind(values[i], decimals[i], most);
            scaled[i] = kinds[i] < Overload ? Scale(values[i], decimals[i], most) : i == 0 ? 0 : scaled[i - 1];
            if (kinds[i] >= Raw)
            {
                raw.Add(values[i]);
            }
        }

        writer.Write((ulong)most, 4);
        IntegerColumn.Write(writer, kinds);
        IntegerColumn.Write(writer, scaled);
        foreach (var value in CollectionsMarshal.AsSpan(raw))
        {
            writer.Write(BitConverter.DoubleToUInt64Bits(value), 64);
        }
    }

    public static void Read(ref BitReader reader, Span<double> values, Span<int> decimals)
    {
        var most = (int)reader.Read(4);
        var kinds = new long[values.Length];
        var scaled = new long[values.Length];
        IntegerColumn.Read(ref reader, kinds);
        IntegerColumn.Read(ref reader, scaled);
        for (var i = 0; i < values.Length; i++)
        {
            var kind = (int)kinds[i];
            decimals[i] = kind < Overload ? kind : kind >= Raw ? kind - Raw - 1 : 0;
            values[i] = kind switch
            {
                Overload => double.PositiveInfinity,
                Missing => double.NaN,
                >= Raw => BitConverter.UInt64BitsToDouble(reader.Read(64)),
                >= 0 and < Overload when kind == most => LineReading.Rebuild(scaled[i], kind),
                >= 0 and < Overload when kind < most => LineReading.Rebuild(scaled[i] / (long)LineReading.PowerOfTen(most - kind), kind),
                _ => throw new InvalidDataException($"kind {kind} of a packed reading is unknown"),
            };
        }
    }

    private static int Kind(double value, int decimals, int most) => value switch
    {
        double.PositiveInfinity => Overload,
        double.NaN => Missing,
        _ when decimals < 0 || !double.IsFinite(value) => Raw,
        _ when Math.Abs(value) * LineReading.PowerOfTen(most) >= LargestScaled => Raw + 1 + decimals,
        _ => decimals,
    };

    private static long Scale(double value, int decimals, int most) =>
        LineReading.Mantissa(value, decimals) * (long)LineReading.PowerOfTen(most - decimals);
}
