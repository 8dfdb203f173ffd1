using System.Buffers.Binary;

namespace Lampwarden.Host.Recording.Packing;

/// <summary>
/// The slots of one full chunk as bytes. Minima and maxima come back to the last digit; sums are kept to
/// 1e-9 of the unit a reading, so a mean is good to a thousandth of any meter's last digit.
/// </summary>
internal static class SlotChunk
{
    private const byte Format = 1;
    private const int Head = 5;
    private const int SumDecimals = 9;

    public static byte[] Pack(IReadOnlyList<Slot> slots)
    {
        var writer = new BitWriter();
        writer.Write(Format, 8);
        writer.Write(0, 32);
        writer.WriteNumber(slots.Count);
        Write(writer, slots, slot => slot.Index);
        Write(writer, slots, slot => slot.Overloads);
        Write(writer, slots, slot => slot.Missing);
        WriteExtent(writer, slots, slot => slot.Amps);
        WriteExtent(writer, slots, slot => slot.Volts);
        var bytes = writer.ToArray();
        BinaryPrimitives.WriteUInt32BigEndian(bytes.AsSpan(1), ReadingChunk.CheckSum(bytes.AsSpan(Head)));
        return bytes;
    }

    /// <summary>The slots of a chunk.</summary>
    /// <exception cref="InvalidDataException">The bytes are not those that were written.</exception>
    public static Slot[] Unpack(ReadOnlySpan<byte> bytes)
    {
        if (bytes.Length < Head || bytes[0] != Format
            || BinaryPrimitives.ReadUInt32BigEndian(bytes[1..]) != ReadingChunk.CheckSum(bytes[Head..]))
        {
            throw new InvalidDataException("the roll-up's check sum does not fit its bytes");
        }

        var reader = new BitReader(bytes[Head..]);
        var count = (int)reader.ReadNumber();
        var (index, overloads, missing) = (new long[count], new long[count], new long[count]);
        IntegerColumn.Read(ref reader, index);
        IntegerColumn.Read(ref reader, overloads);
        IntegerColumn.Read(ref reader, missing);
        var amps = ReadExtent(ref reader, count);
        var volts = ReadExtent(ref reader, count);
        var slots = new Slot[count];
        for (var i = 0; i < count; i++)
        {
            slots[i] = new Slot(index[i], amps[i], volts[i], (int)overloads[i], (int)missing[i]);
        }

        return slots;
    }

    private static void Write(BitWriter writer, IReadOnlyList<Slot> slots, Func<Slot, long> number)
    {
        var column = new long[slots.Count];
        for (var i = 0; i < column.Length; i++)
        {
            column[i] = number(slots[i]);
        }

        IntegerColumn.Write(writer, column);
    }

    private static void WriteExtent(BitWriter writer, IReadOnlyList<Slot> slots, Func<Slot, Extent> extent)
    {
        Write(writer, slots, slot => extent(slot).Count);
        WriteNumbers(writer, slots, slot => extent(slot).Least);
        WriteNumbers(writer, slots, slot => extent(slot).Most);
        // The mean in billionths: its distance from the minimum is small and steady, as the sum's size is not.
        Write(writer, slots, slot => extent(slot) is { Count: > 0 } some && Math.Abs(some.Sum) < 1e6 * some.Count
            ? (long)Math.Round(some.Sum / some.Count * LineReading.PowerOfTen(SumDecimals)) : 0);
    }

    private static void WriteNumbers(BitWriter writer, IReadOnlyList<Slot> slots, Func<Slot, double> number)
    {
        var (values, decimals) = (new double[slots.Count], new int[slots.Count]);
        for (var i = 0; i < values.Length; i++)
        {
            var value = new LineReading(0, number(slots[i]));
            (values[i], decimals[i]) = (double.IsFinite(value.Amps) ? value.Amps : double.NaN, value.Decimals);
        }

        NumberColumn.Write(writer, values, decimals);
    }

    private static Extent[] ReadExtent(ref BitReader reader, int count)
    {
        var (counts, means) = (new long[count], new long[count]);
        var (least, most, decimals) = (new double[count], new double[count], new int[count]);
        IntegerColumn.Read(ref reader, counts);
        NumberColumn.Read(ref reader, least, decimals);
        NumberColumn.Read(ref reader, most, decimals);
        IntegerColumn.Read(ref reader, means);
        var extents = new Extent[count];
        for (var i = 0; i < count; i++)
        {
            extents[i] = counts[i] == 0 ? Extent.None
                : new Extent((int)counts[i], least[i], most[i], LineReading.Rebuild(means[i], SumDecimals) * counts[i]);
        }

        return extents;
    }
}
