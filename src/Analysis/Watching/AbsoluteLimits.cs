namespace Lampwarden.Analysis.Watching;

/// <summary>
/// Limits from prediction, active from the first reading: the only guard against a fault that was there when the unit was switched on,
/// which nothing that learns from the unit itself can see.
/// </summary>
internal sealed class AbsoluteLimits(FindingBook book)
{
    // Near the bank's shorted current the unit's share of the mains is gone: at 0.95 of it a lamp bank leaves under 10 % of the volts to the unit.
    private const double ShortedShare = 0.93;
    private const double LeastContrast = 1.15;
    private const int ReadingsToRaise = 3;
    private const double OutOfBandSeconds = 30;
    private const double OpenShare = 0.05;

    private int shortedInARow;
    private int openInARow;
    private double outsideSince = double.NaN;
    private double insideSince = double.NaN;
    private int shorted;
    private int open;
    private int offPrediction;

    public bool ShortedStands => book.Stands(shorted);

    /// <summary>Compares one reading; <paramref name="settled"/> says whether the switch-on transient is over, <paramref name="scale"/> carries the bands to the present mains.</summary>
    /// <param name="seconds">Time of the reading.</param>
    /// <param name="amps">What was shown.</param>
    /// <param name="scale">See above.</param>
    /// <param name="settled">See above.</param>
    /// <param name="expected">The prediction in force.</param>
    /// <param name="covered">Another finding already speaks of this moment: nothing is raised twice.</param>
    /// <param name="bandCovered">Another finding already says that the level is not what it was.</param>
    public void Observe(double seconds, double amps, double scale, bool settled, Expectation expected, bool covered, bool bandCovered)
    {
        var shortedAmps = expected.ShortedAmps * scale;
        var tellsShort = settled && expected.ShortedAmps > expected.SteadyAmps * LeastContrast;
        shortedInARow = tellsShort && amps > shortedAmps * ShortedShare ? shortedInARow + 1 : 0;
        if (shortedInARow >= ReadingsToRaise && !covered && !book.Stands(shorted))
        {
            shorted = book.Raise(Signature.HardShort, Severity.Critical, seconds, seconds, Advice.Shorted(amps, shortedAmps), Evidence(amps, expected, scale));
        }
        else if (shortedInARow == 0 && book.Stands(shorted) && amps < shortedAmps * (ShortedShare - 0.05))
        {
            book.Clear(shorted, seconds);
        }

        openInARow = settled && amps < expected.SteadyAmps * scale * OpenShare ? openInARow + 1 : 0;
        if (openInARow >= ReadingsToRaise && !covered && !book.Stands(open))
        {
            open = book.Raise(Signature.OpenCircuit, Severity.Critical, seconds, seconds, Advice.Open(amps), Evidence(amps, expected, scale));
        }
        else if (openInARow == 0 && book.Stands(open) && amps > expected.SteadyAmps * scale * OpenShare * 2)
        {
            book.Clear(open, seconds);
        }

        WatchBand(seconds, amps, scale, settled, expected, covered || bandCovered);
    }

    private void WatchBand(double seconds, double amps, double scale, bool settled, Expectation expected, bool covered)
    {
        var (low, high) = (expected.BandLowAmps * scale, expected.BandHighAmps * scale);
        var outside = settled && (amps < low || amps > high);
        if (outside)
        {
            insideSince = double.NaN;
            outsideSince = double.IsNaN(outsideSince) ? seconds : outsideSince;
            if (seconds - outsideSince >= OutOfBandSeconds && !covered && !book.Stands(offPrediction) && !book.Stands(shorted) && !book.Stands(open))
            {
                var sentence = amps > high ? Advice.AboveBand(amps, low, high) : Advice.BelowBand(amps, low, high);
                offPrediction = book.Raise(Signature.OffPrediction, Severity.Warning, outsideSince, seconds, sentence, Evidence(amps, expected, scale));
            }
        }
        else
        {
            outsideSince = double.NaN;
            insideSince = double.IsNaN(insideSince) ? seconds : insideSince;
            // Off-delay of 60 s, on-delay of three readings or 30 s: a limit alarm should neither chatter nor come late (ISA-18.2 practice).
            if (seconds - insideSince >= 60 && book.Stands(offPrediction))
            {
                book.Clear(offPrediction, seconds);
            }
        }
    }

    private static Dictionary<string, double> Evidence(double amps, Expectation expected, double scale) => new()
    {
        ["lineAmps"] = amps,
        ["expectedAmps"] = expected.SteadyAmps * scale,
        ["bandLowAmps"] = expected.BandLowAmps * scale,
        ["bandHighAmps"] = expected.BandHighAmps * scale,
        ["shortedAmps"] = expected.ShortedAmps * scale,
    };

    public void Transfer(StateStream state)
    {
        state.Field(ref shortedInARow);
        state.Field(ref openInARow);
        state.Field(ref outsideSince);
        state.Field(ref insideSince);
        state.Field(ref shorted);
        state.Field(ref open);
        state.Field(ref offPrediction);
    }
}
