using static System.FormattableString;

namespace Lampwarden.Analysis.Watching;

/// <summary>What may stand behind a sudden change that stays.</summary>
internal enum Cause
{
    UnitTakesMore,
    UnitTakesLess,
    CircuitOpened,
    LampDark,
    LampLit,
    MainsMoved,
    MeterScale,
    UserChange,
}

/// <summary>The likeliest cause, how much likelier than the next, and the next.</summary>
internal readonly record struct Explained(Cause Cause, ExpectedLamp? Lamp, double Times, Cause Next, ExpectedLamp? NextLamp);

/// <summary>
/// Competing hypotheses about a step, scored by likelihood of its size times how common the cause is. The priors are common practice, no
/// published source: parts and lamps fail about as often, meters and mains seldom change by themselves.
/// </summary>
internal static class Hypotheses
{
    // Lamp predictions: 12 % of the change (nameplate tolerance and the curve), at least 0.5 %.
    private const double LampShareSd = 0.12, LampLeastSd = 0.005;
    private const double DarkLog = -2.3;

    // An unmeasured mains moves for good by a tap or so, seldom by more than 2 %.
    private const double MainsShiftSd = 0.01;

    /// <param name="change">Natural logarithm of new over old current.</param>
    /// <param name="sd">Sd of that.</param>
    /// <param name="expected">What prediction knows of the lamps; may be null.</param>
    /// <param name="mainsMeasured">Whether a mains change would have been seen and taken out.</param>
    public static Explained Weigh(double change, double sd, Expectation? expected, bool mainsMeasured)
    {
        var best = (Cause: Cause.UserChange, Lamp: (ExpectedLamp?)null, Score: Math.Log(0.05) + Flat(change, -1.5, 1.5));
        var next = (Cause: Cause.MeterScale, Lamp: (ExpectedLamp?)null, Score: double.NegativeInfinity);
        void Try(Cause cause, ExpectedLamp? lamp, double score)
        {
            if (score > best.Score)
            {
                (next, best) = (best, (cause, lamp, score));
            }
            else if (score > next.Score)
            {
                next = (cause, lamp, score);
            }
        }

        Try(Cause.UnitTakesMore, null, Math.Log(0.35) + Flat(change, 0, 2.5));
        Try(Cause.UnitTakesLess, null, Math.Log(0.15) + Flat(change, DarkLog, 0));
        Try(Cause.CircuitOpened, null, Math.Log(0.35) + Flat(change, -12, -1.3) + 2);
        Try(Cause.MeterScale, null, Math.Log(0.01) + Math.Max(Near(change, Math.Log(10), 0.02, sd), Near(change, -Math.Log(10), 0.02, sd)));
        if (!mainsMeasured)
        {
            Try(Cause.MainsMoved, null, Math.Log(0.1) + Near(change, 0, MainsShiftSd, sd));
        }

        var lamps = expected?.Lamps ?? [];
        if (lamps.Count == 0)
        {
            Try(Cause.LampDark, null, Math.Log(0.3) + Flat(change, -0.9, 0));
        }

        foreach (var lamp in lamps)
        {
            var dark = Math.Log(Math.Max(lamp.AmpsWithout / expected!.SteadyAmps, 1e-6));
            if (dark is < 0 and > DarkLog)
            {
                Try(Cause.LampDark, lamp, Math.Log(0.3 / lamps.Count) + Near(change, dark, LampSd(dark), sd));
            }

            var lit = Math.Log(lamp.AmpsWith / expected.SteadyAmps);
            if (double.IsFinite(lit))
            {
                Try(Cause.LampLit, lamp, Math.Log(0.15 / lamps.Count) + Near(change, lit, LampSd(lit), sd));
            }
        }

        return new Explained(best.Cause, best.Lamp, Math.Exp(Math.Min(best.Score - next.Score, 20)), next.Cause, next.Lamp);
    }

    private static double LampSd(double change) => Math.Max(LampShareSd * Math.Abs(change), LampLeastSd);

    private static double Flat(double value, double low, double high) =>
        value >= low && value <= high ? -Math.Log(high - low) : -20;

    private static double Near(double value, double centre, double spread, double sd)
    {
        var variance = (spread * spread) + (sd * sd);
        return (-0.5 * (value - centre) * (value - centre) / variance) - (0.5 * Math.Log(2 * Math.PI * variance));
    }

    /// <summary>The cause in words that fit after "most likely".</summary>
    public static string Words(Cause cause, ExpectedLamp? lamp) => cause switch
    {
        Cause.UnitTakesMore => "a part of the unit has shorted",
        Cause.UnitTakesLess => "a part of the unit has dropped out",
        Cause.CircuitOpened => "the circuit has opened",
        Cause.LampDark => lamp is null ? "a lamp of the bank has gone dark" : $"lamp {lamp.Name} has gone dark",
        Cause.LampLit => $"lamp {lamp?.Name} was switched in",
        Cause.MainsMoved => "the mains has moved",
        Cause.MeterScale => "the meter's range or scale has changed",
        _ => "somebody has changed the load",
    };

    /// <summary>"most likely ..., N times likelier than that ...".</summary>
    public static string Sentence(in Explained why) => why.Times < 1.5
        ? Invariant($"either {Words(why.Cause, why.Lamp)} or {Words(why.Next, why.NextLamp)}")
        : Invariant($"most likely {Words(why.Cause, why.Lamp)} ({Math.Min(why.Times, 1000):0.#} times likelier than that {Words(why.Next, why.NextLamp)})");
}
