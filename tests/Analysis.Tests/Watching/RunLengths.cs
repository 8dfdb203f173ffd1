using MathNet.Numerics.Distributions;
using MathNet.Numerics.Integration;
using MathNet.Numerics.LinearAlgebra;

namespace Lampwarden.Analysis.Tests.Watching;

/// <summary>Mean run lengths by the integral equation (Gauss-Legendre Nystroem), the reference our recursions are held against.</summary>
internal static class RunLengths
{
    private const int Nodes = 80;

    /// <summary>One-sided CUSUM of N(shift, 1), from a start value.</summary>
    public static double Cusum(double k, double h, double shift, double start = 0)
    {
        var (x, w) = Rule(0, h);
        var n = x.Length + 1; // last unknown: from zero
        var matrix = Matrix<double>.Build.Dense(n, n);
        double From(int i) => i < x.Length ? x[i] : 0;
        for (var i = 0; i < n; i++)
        {
            for (var j = 0; j < x.Length; j++)
            {
                matrix[i, j] = -w[j] * Normal.PDF(0, 1, x[j] + k - shift - From(i));
            }

            matrix[i, x.Length] = -Normal.CDF(0, 1, k - shift - From(i));
            matrix[i, i] += 1;
        }

        var lengths = matrix.Solve(Vector<double>.Build.Dense(n, 1));
        var sum = 1 + (lengths[n - 1] * Normal.CDF(0, 1, k - shift - start));
        for (var j = 0; j < x.Length; j++)
        {
            sum += w[j] * lengths[j] * Normal.PDF(0, 1, x[j] + k - shift - start);
        }

        return sum;
    }

    /// <summary>Two one-sided schemes together, no head start: 1/ARL = 1/up + 1/down (van Dobben de Bruyn 1968).</summary>
    public static double TwoSided(double k, double h, double shift) => 1 / ((1 / Cusum(k, h, shift)) + (1 / Cusum(k, h, -shift)));

    /// <summary>Two-sided with head starts of half the threshold (Lucas and Crosier 1982, appendix).</summary>
    public static double FastStart(double k, double h, double shift)
    {
        var (a0, b0) = (Cusum(k, h, shift), Cusum(k, h, -shift));
        var (a, b) = (Cusum(k, h, shift, h / 2), Cusum(k, h, -shift, h / 2));
        return ((a * b0) + (b * a0) - (a0 * b0)) / (a0 + b0);
    }

    /// <summary>Two-sided EWMA with fixed limits.</summary>
    public static double Ewma(double lambda, double limit, double shift)
    {
        var bound = limit * Math.Sqrt(lambda / (2 - lambda));
        var (x, w) = Rule(-bound, bound);
        var matrix = Matrix<double>.Build.DenseIdentity(x.Length);
        double Kernel(double from, double to) => Normal.PDF(0, 1, ((to - ((1 - lambda) * from)) / lambda) - shift) / lambda;
        for (var i = 0; i < x.Length; i++)
        {
            for (var j = 0; j < x.Length; j++)
            {
                matrix[i, j] -= w[j] * Kernel(x[i], x[j]);
            }
        }

        var lengths = matrix.Solve(Vector<double>.Build.Dense(x.Length, 1));
        var sum = 1.0;
        for (var j = 0; j < x.Length; j++)
        {
            sum += w[j] * lengths[j] * Kernel(0, x[j]);
        }

        return sum;
    }

    /// <summary>One-sided CUSUM of a linear drift of <paramref name="beta"/> an observation, by backward recursion from where the alarm is certain.</summary>
    /// <param name="first">Drift of the first observation in units of beta: 0 (Gan 1992) or 1 (Zou et al. 2009).</param>
    public static double Drift(double k, double h, double beta, int first)
    {
        var (x, w) = Rule(0, h);
        var last = (int)Math.Ceiling((h + 12) / beta);
        last = Math.Min(last, 40_000);
        var next = new double[x.Length + 1];
        Array.Fill(next, 1.0);
        for (var m = last; m >= 0; m--)
        {
            var now = new double[x.Length + 1];
            var mean = (m + first) * beta;
            for (var i = 0; i <= x.Length; i++)
            {
                var from = i < x.Length ? x[i] : 0;
                var sum = 1 + (next[x.Length] * Normal.CDF(0, 1, k - mean - from));
                for (var j = 0; j < x.Length; j++)
                {
                    sum += w[j] * next[j] * Math.Exp(-0.5 * Math.Pow(x[j] + k - mean - from, 2)) / Math.Sqrt(2 * Math.PI);
                }

                now[i] = sum;
            }

            next = now;
        }

        return next[x.Length];
    }

    private static (double[] X, double[] W) Rule(double low, double high)
    {
        var rule = new GaussLegendreRule(low, high, Nodes);
        return (rule.Abscissas, rule.Weights);
    }
}
