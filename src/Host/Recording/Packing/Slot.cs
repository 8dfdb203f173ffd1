namespace Lampwarden.Host.Recording.Packing;

/// <summary>Minimum, maximum, sum and count of one quantity over one stretch of time.</summary>
internal record struct Extent(int Count, double Least, double Most, double Sum)
{
    public static readonly Extent None = new(0, double.PositiveInfinity, double.NegativeInfinity, 0);

    public void Add(double value)
    {
        Count++;
        Least = Math.Min(Least, value);
        Most = Math.Max(Most, value);
        Sum += value;
    }

    public void Add(in Extent other)
    {
        Count += other.Count;
        Least = Math.Min(Least, other.Least);
        Most = Math.Max(Most, other.Most);
        Sum += other.Sum;
    }
}

/// <summary>
/// Roll-up of the readings within one ten-second slot of a run (slot n holds n * 10 s up to (n + 1) * 10 s). A slot that a
/// chunk boundary cuts appears in both chunks, and the two halves add up.
/// </summary>
internal record struct Slot(long Index, Extent Amps, Extent Volts, int Overloads, int Missing)
{
    /// <summary>Width of a slot in milliseconds. Part of the stored format.</summary>
    public const long Milliseconds = 10_000;

    public static List<Slot> Of(ReadOnlySpan<LineReading> readings)
    {
        var slots = new List<Slot>();
        foreach (ref readonly var reading in readings)
        {
            var index = Math.DivRem(reading.Milliseconds, Milliseconds).Quotient;
            if (slots.Count == 0 || slots[^1].Index != index)
            {
                slots.Add(new Slot(index, Extent.None, Extent.None, 0, 0));
            }

            var slot = slots[^1];
            slot.Add(reading);
            slots[^1] = slot;
        }

        return slots;
    }

    public void Add(in LineReading reading)
    {
        if (reading.IsMissing)
        {
            Missing++;
        }
        else if (!double.IsFinite(reading.Amps))
        {
            Overloads++;
        }
        else
        {
            var amps = Amps;
            amps.Add(reading.Amps);
            Amps = amps;
        }

        if (double.IsFinite(reading.MainsVolts))
        {
            var volts = Volts;
            volts.Add(reading.MainsVolts);
            Volts = volts;
        }
    }

    public void Add(in Slot other)
    {
        var (amps, volts) = (Amps, Volts);
        amps.Add(other.Amps);
        volts.Add(other.Volts);
        (Amps, Volts) = (amps, volts);
        Overloads += other.Overloads;
        Missing += other.Missing;
    }
}
