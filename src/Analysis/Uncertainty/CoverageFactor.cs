using MathNet.Numerics.Distributions;

namespace Lampwarden.Analysis.Uncertainty;

/// <summary>
/// The factor k by which a standard uncertainty is widened to cover 95 %: 1.96 where everything is normal, 1.645 where one rectangle rules.
/// Between them the exact factor of one rectangle and one normal added, with the rectangle's share chosen so that the fourth moment of all
/// contributions is met (JCGM 100 G.2 asks for the distribution of the sum where a rectangle dominates).
/// </summary>
internal static class CoverageFactor
{
    public const double Coverage = 0.95;

    private const int Cells = 100;
    private static readonly double[] Factors = [.. Enumerable.Range(0, Cells + 1).Select(cell => Solve(cell / (double)Cells))];

    /// <summary>The factor where a rectangle holds this share of the combined standard uncertainty, 0 to 1.</summary>
    public static double Of(double rectangleShare)
    {
        var place = Math.Clamp(rectangleShare, 0, 1) * Cells;
        var cell = Math.Min((int)place, Cells - 1);
        return Factors[cell] + (place - cell) * (Factors[cell + 1] - Factors[cell]);
    }

    private static double Solve(double share)
    {
        double low = 1.5, high = 2.1;
        for (var halving = 0; halving < 40; halving++)
        {
            var middle = 0.5 * (low + high);
            (low, high) = Covered(middle, share) < Coverage ? (middle, high) : (low, middle);
        }

        return low;
    }

    // Probability that a rectangle of standard deviation s plus a normal of sqrt(1 - s^2) stays within k.
    private static double Covered(double factor, double share)
    {
        var half = share * Math.Sqrt(3);
        var sigma = Math.Sqrt(Math.Max(0, 1 - share * share));
        if (half < 1e-6)
        {
            return 2 * Normal.CDF(0, 1, factor) - 1;
        }

        if (sigma < 1e-6)
        {
            return Math.Min(1, factor / half);
        }

        // The integral of the normal distribution function over the rectangle, by x Phi(x) + phi(x).
        double Area(double x) => x * Normal.CDF(0, 1, x) + Normal.PDF(0, 1, x);
        var above = sigma / (2 * half) * (Area((factor + half) / sigma) - Area((factor - half) / sigma));
        return 2 * above - 1;
    }
}
