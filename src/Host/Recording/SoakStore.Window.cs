using Lampwarden.Host.Recording.Packing;

namespace Lampwarden.Host.Recording;

public sealed partial class SoakStore
{
    /// <summary>
    /// A stretch of a run in at most <paramref name="mostBuckets"/> buckets of equal width. Wide buckets come from ten-second
    /// roll-ups, so their width is a whole number of those and the first edge falls back to one; narrow ones come from the readings.
    /// A time without readings is buckets of count 0, never a line drawn across.
    /// </summary>
    /// <param name="fromSeconds">Seconds since the run began, 0 or more.</param>
    /// <param name="toSeconds">Above <paramref name="fromSeconds"/>; infinity takes the run's end.</param>
    /// <exception cref="StoreException">There is no such run, or a part of it is damaged.</exception>
    public RunWindow Window(string run, double fromSeconds = 0, double toSeconds = double.PositiveInfinity, int mostBuckets = 2000)
    {
        ArgumentOutOfRangeException.ThrowIfLessThan(mostBuckets, 1);
        ArgumentOutOfRangeException.ThrowIfNegative(fromSeconds);
        return Read(reader =>
        {
            var key = KeyOf(reader, run);
            var from = (long)Math.Floor(fromSeconds * 1000);
            var to = double.IsPositiveInfinity(toSeconds)
                ? Math.Max(from + 1, reader.Count(key, "SELECT coalesce(max(to_ms),0)+1 FROM chunks WHERE run=$run"))
                : Math.Max(from + 1, (long)Math.Ceiling(toSeconds * 1000));
            var width = Math.Max(1, (to - from + mostBuckets - 1) / mostBuckets);
            var rolled = width >= Slot.Milliseconds;
            if (rolled)
            {
                from -= from % Slot.Milliseconds;
                width = (to - from + mostBuckets - 1) / mostBuckets;
                width = (width + Slot.Milliseconds - 1) / Slot.Milliseconds * Slot.Milliseconds;
            }

            var sums = new Slot[(int)((to - from + width - 1) / width)];
            Array.Fill(sums, new Slot(0, Extent.None, Extent.None, 0, 0));
            var firstEntry = rolled ? AddSlots(reader, key, sums, from, to, width) : 0;
            foreach (var (first, data) in reader.Chunks(key, from, to, firstEntry))
            {
                AddReadings(Unpack(run, first, data), sums, from, to, width);
            }

            return new RunWindow(
                from / 1000.0, to / 1000.0, width / 1000.0, [.. sums.Select((sum, index) => ToBucket(sum, from + (index * width), width))],
                GapsOf(reader, key, from, to));
        });
    }

    private static long AddSlots(StoreReader reader, long key, Slot[] sums, long from, long to, long width)
    {
        foreach (var slots in reader.Slots(key, from, to))
        {
            foreach (ref readonly var slot in slots.AsSpan())
            {
                var at = (slot.Index * Slot.Milliseconds) - from;
                if (at >= 0 && at < to - from)
                {
                    sums[at / width].Add(slot);
                }
            }
        }

        return reader.FirstShort(key);
    }

    private static void AddReadings(LineReading[] readings, Slot[] sums, long from, long to, long width)
    {
        foreach (ref readonly var reading in readings.AsSpan())
        {
            if (reading.Milliseconds >= from && reading.Milliseconds < to)
            {
                sums[(reading.Milliseconds - from) / width].Add(reading);
            }
        }
    }

    private static Bucket ToBucket(in Slot sum, long from, long width) => new(
        from / 1000.0, (from + width) / 1000.0, sum.Amps.Count,
        Some(sum.Amps, sum.Amps.Least), Some(sum.Amps, sum.Amps.Most), Some(sum.Amps, sum.Amps.Sum / sum.Amps.Count),
        Some(sum.Volts, sum.Volts.Least), Some(sum.Volts, sum.Volts.Most), Some(sum.Volts, sum.Volts.Sum / sum.Volts.Count),
        sum.Overloads, sum.Missing);

    private static double Some(in Extent extent, double number) => extent.Count == 0 ? double.NaN : number;
}
