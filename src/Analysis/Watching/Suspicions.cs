namespace Lampwarden.Analysis.Watching;

/// <summary>One kind of slow fault that is suspected all the time.</summary>
/// <param name="Sign">+1 rising, -1 falling.</param>
/// <param name="Least">Smallest size, in the shape's unit.</param>
/// <param name="Most">Largest size.</param>
/// <param name="Threshold">Log likelihood ratio at which it is cried.</param>
/// <param name="LeastExcess">Departure below which nothing is cried, relative.</param>
internal sealed record Suspect(FaultShape Shape, int Sign, double Least, double Most, double Threshold, double LeastExcess);

/// <summary>What the slow channel thinks after a block.</summary>
/// <param name="Direction">+1 rising, -1 falling, 0 nothing.</param>
internal readonly record struct SlowCry(
    int Direction, FaultShape Shape, double OnsetSeconds, double Size, double SizeSd, double Excess, double Ratio, double RampRatio, double GrowthRatio, double StepRatio);

/// <summary>Asks after every block which slow fault has become likely enough to be cried.</summary>
internal sealed class Suspicions(FaultScores scores, bool mainsMeasured)
{
    // The budget of false alarms behind the thresholds is in docs/watch.md.
    private static readonly Suspect[] WithMains =
    [
        new(FaultShape.Ramp, 1, 0.003, 0.02, 7, 0.009),
        new(FaultShape.Ramp, 1, 0.02, 3, 11.5, 0.004),
        new(FaultShape.QuickGrowth, 1, 0.0005, 0.01, 11.5, 0.004),
        new(FaultShape.SlowGrowth, 1, 0.0005, 0.01, 10.5, 0.004),
        new(FaultShape.Step, 1, 0.004, 0.5, 13, 0.006),
        new(FaultShape.Ramp, -1, 0.003, 3, 20, 0.012),
        new(FaultShape.Step, -1, 0.004, 0.5, 14, 0.012),
    ];

    // Where the mains is not measured a tap change of a transformer (up to 1.25 %) and the day's swing look like the unit's doing: nothing
    // smaller is cried.
    private static readonly Suspect[] WithoutMains =
    [
        new(FaultShape.Ramp, 1, 0.003, 0.02, 8.5, 0.03),
        new(FaultShape.Ramp, 1, 0.02, 0.4, 10, 0.014),
        new(FaultShape.QuickGrowth, 1, 0.0005, 0.01, 10, 0.014),
        new(FaultShape.SlowGrowth, 1, 0.0005, 0.01, 9, 0.014),
        new(FaultShape.Step, 1, 0.004, 0.5, 13, 0.023),
        new(FaultShape.Ramp, -1, 0.003, 0.4, 20, 0.04),
        new(FaultShape.Step, -1, 0.004, 0.5, 14, 0.023),
    ];

    private const double TapThreshold = 9, MostTap = 0.02;

    private readonly Suspect[] suspects = mainsMeasured ? WithMains : WithoutMains;

    // Rising and falling cycles of the room alike teach how high a cycle reaches; the slowest ramps are longer than any cycle and learn apart.
    private readonly Unrest unrest = new();
    private readonly Unrest slowUnrest = new();
    private readonly SlowCry[] latest = new SlowCry[WithMains.Length];

    /// <summary>The likeliest fault that passes its threshold by most; direction 0 if none does.</summary>
    /// <param name="seconds">Now.</param>
    /// <param name="extra">Raises every threshold, while little is known yet.</param>
    /// <param name="leastExcess">Raises every least departure.</param>
    public SlowCry Ask(double seconds, double extra, double leastExcess)
    {
        var (best, margin) = (-1, 0.0);
        var highest = 0.0;
        for (var s = 0; s < suspects.Length; s++)
        {
            var suspect = suspects[s];
            var cry = latest[s] = Weigh(suspect, seconds);
            var slow = suspect.Shape == FaultShape.Ramp && suspect.Most < 0.1;
            var over = cry.Ratio - extra - Math.Max(suspect.Threshold, slow ? slowUnrest.Usual : unrest.Usual);
            if (slow)
            {
                slowUnrest.Observe(seconds, cry.Ratio);
            }
            else if (suspect.Shape != FaultShape.Step)
            {
                highest = Math.Max(highest, cry.Ratio);
            }

            if (over > margin && Math.Abs(cry.Excess) > Math.Max(suspect.LeastExcess, leastExcess))
            {
                (best, margin) = (s, over);
            }
        }

        unrest.Observe(seconds, highest);
        return best < 0 ? default : WithRivals(latest[best]);
    }

    /// <summary>A small step that is taken for a tap change of an unmeasured mains, relative; 0 if there is none. Asked after <see cref="Ask"/>.</summary>
    public double Tap()
    {
        if (mainsMeasured)
        {
            return 0;
        }

        var tap = default(SlowCry);
        for (var s = 0; s < suspects.Length; s++)
        {
            if (suspects[s].Shape == FaultShape.Step && latest[s].Ratio > Math.Max(TapThreshold, tap.Ratio))
            {
                tap = latest[s];
            }
        }

        return Math.Abs(tap.Size) < MostTap && tap.Ratio > WithRivals(tap).RampRatio + 2 ? tap.Size : 0;
    }

    /// <summary>The likeliest fault of one direction, cried or not.</summary>
    public SlowCry Best(double seconds, int sign)
    {
        var best = default(SlowCry);
        best = best with { Ratio = double.NegativeInfinity };
        for (var s = 0; s < suspects.Length; s++)
        {
            if (suspects[s].Sign == sign)
            {
                latest[s] = Weigh(suspects[s], seconds);
                best = latest[s].Ratio > best.Ratio ? latest[s] : best;
            }
        }

        return WithRivals(best);
    }

    private SlowCry WithRivals(in SlowCry cry)
    {
        var (ramp, growth, step) = (double.NegativeInfinity, double.NegativeInfinity, double.NegativeInfinity);
        for (var s = 0; s < suspects.Length; s++)
        {
            if (suspects[s].Sign == cry.Direction)
            {
                var ratio = latest[s].Ratio;
                switch (suspects[s].Shape)
                {
                    case FaultShape.Ramp:
                        ramp = Math.Max(ramp, ratio);
                        break;
                    case FaultShape.Step:
                        step = Math.Max(step, ratio);
                        break;
                    default:
                        growth = Math.Max(growth, ratio);
                        break;
                }
            }
        }

        return cry with { RampRatio = ramp, GrowthRatio = growth, StepRatio = step };
    }

    private SlowCry Weigh(Suspect suspect, double seconds)
    {
        var (low, high) = suspect.Sign > 0 ? (suspect.Least, suspect.Most) : (-suspect.Most, -suspect.Least);
        var (top, where) = (double.NegativeInfinity, -1);
        for (var c = 0; c < scores.Count; c++)
        {
            var ratio = scores.Ratio(c, suspect.Shape, low, high);
            if (ratio > top)
            {
                (top, where) = (ratio, c);
            }
        }

        if (where < 0)
        {
            return new SlowCry(suspect.Sign, suspect.Shape, seconds, 0, 0, 0, double.NegativeInfinity, 0, 0, 0);
        }

        var (size, sd) = scores.Size(where, suspect.Shape);
        size = Math.Clamp(size, low, high);
        var onset = scores.Onset(where);
        return new SlowCry(suspect.Sign, suspect.Shape, onset, size, sd, size * FaultScores.Unit(suspect.Shape, seconds - onset), top, 0, 0, 0);
    }

    /// <summary>The onsets were thrown away: what was suspected has not come to nothing, it was explained.</summary>
    public void Forget()
    {
        unrest.Forget();
        slowUnrest.Forget();
    }

    public void Transfer(StateStream state)
    {
        unrest.Transfer(state);
        slowUnrest.Transfer(state);
    }
}
