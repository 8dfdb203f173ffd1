namespace Lampwarden.Analysis.Watching;

/// <summary>When an excess will be reached, seconds from now, with a 90 % interval; infinite where it may never be, 0 where it is passed.</summary>
internal readonly record struct Forecast(double MiddleSeconds, double LowSeconds, double HighSeconds)
{
    // Profile likelihood: everything within this of the best belongs to the interval. 1.353 is half the 90 % point of chi-square with one
    // degree of freedom; half of it gave 90 % on
    // the tuning corpora, as the union over onsets and shapes widens the interval already.
    private const double Reach = 1.353 * 0.5;

    private static readonly FaultShape[] Shapes = [FaultShape.Ramp, FaultShape.SlowGrowth, FaultShape.QuickGrowth];

    /// <summary>From every onset and shape that the readings still allow.</summary>
    public static Forecast Of(FaultScores scores, double now, double target)
    {
        var top = double.NegativeInfinity;
        foreach (var shape in Shapes)
        {
            for (var c = 0; c < scores.Count; c++)
            {
                top = Math.Max(top, scores.Ratio(c, shape, Least(shape), Most(shape)));
            }
        }

        var (middle, low, high, best) = (double.PositiveInfinity, double.PositiveInfinity, 0.0, double.NegativeInfinity);
        foreach (var shape in Shapes)
        {
            for (var c = 0; c < scores.Count; c++)
            {
                var ratio = scores.Ratio(c, shape, Least(shape), Most(shape));
                if (top - ratio > Reach)
                {
                    continue;
                }

                var (size, sd) = scores.Size(c, shape);
                var spread = Math.Sqrt(2 * (Reach - (top - ratio))) * sd;
                var soon = Until(shape, scores.Onset(c), Math.Clamp(size + spread, Least(shape), Most(shape)), now, target);
                var late = Until(shape, scores.Onset(c), Math.Clamp(size - spread, Least(shape), Most(shape)), now, target);
                (low, high) = (Math.Min(low, soon), Math.Max(high, late));
                if (ratio > best)
                {
                    (best, middle) = (ratio, Until(shape, scores.Onset(c), Math.Clamp(size, Least(shape), Most(shape)), now, target));
                }
            }
        }

        return new Forecast(middle, low, high);
    }

    private static double Least(FaultShape shape) => shape == FaultShape.Ramp ? 0.002 : 0.0003;

    private static double Most(FaultShape shape) => shape == FaultShape.Ramp ? 5 : 0.02;

    private static double Until(FaultShape shape, double onset, double size, double now, double target)
    {
        var age = shape == FaultShape.Ramp
            ? target / size * 3600
            : FaultScores.GrowthTau(shape) * Math.Log(1 + (target / size));
        return Math.Max(0, onset + age - now);
    }
}
