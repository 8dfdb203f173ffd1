using CsCheck;
using Lampwarden.Analysis.Watching;
using Xunit;

namespace Lampwarden.Analysis.Tests.Watching;

/// <summary>Published run-length tables, and worked examples number for number.</summary>
public sealed class PublishedChartTests
{
    // Lucas and Crosier 1982, Technometrics 24, 199-205; Montgomery and Runger, Applied Statistics and Probability for Engineers, table 16-9.
    [Theory]
    [InlineData(4, 0, 168)]
    [InlineData(4, 0.25, 74.2)]
    [InlineData(4, 0.5, 26.6)]
    [InlineData(4, 1, 8.38)]
    [InlineData(4, 2, 3.34)]
    [InlineData(4, 3, 2.19)]
    [InlineData(5, 0, 465)]
    [InlineData(5, 0.25, 139)]
    [InlineData(5, 0.5, 38.0)]
    [InlineData(5, 1, 10.4)]
    [InlineData(5, 2, 4.01)]
    [InlineData(5, 3, 2.57)]
    public void TwoSidedCusum_Published_IsReproduced(double h, double shift, double published) =>
        Assert.Equal(published, RunLengths.TwoSided(0.5, h, shift), published * 0.004);

    // Lucas and Crosier 1982, table 1, head start h/2.
    [Theory]
    [InlineData(0, 149)]
    [InlineData(0.25, 62.7)]
    [InlineData(0.5, 20.1)]
    [InlineData(1, 5.29)]
    [InlineData(2, 2.01)]
    [InlineData(4, 1.07)]
    public void FastInitialResponse_Published_IsReproduced(double shift, double published) =>
        Assert.Equal(published, RunLengths.FastStart(0.5, 4, shift), published * 0.004);

    // Brook and Evans 1972; Vance 1986 (his first value is off in the sixth digit); Waldmann 1986 (117.4 there should be 117.6).
    [Theory]
    [InlineData(0.5, 3, 0, 117.59, 0.02)]
    [InlineData(0.5, 3, 1.5, 3.75, 0.002)]
    [InlineData(0.5, 3, -0.5, 1963, 0.5)]
    [InlineData(0, 10, -0.25, 2071.57, 0.01)]
    [InlineData(0, 10, 0, 124.66, 0.005)]
    [InlineData(0, 10, 1, 10.75, 0.005)]
    public void OneSidedCusum_Published_IsReproduced(double k, double h, double shift, double published, double tolerance) =>
        Assert.Equal(published, RunLengths.Cusum(k, h, shift), tolerance);

    // Lucas and Saccucci 1990, Technometrics 32, table 3 (first and last column); SAS/QC manual; Crowder 1987 (1.25 is misprinted 3.95 there).
    [Theory]
    [InlineData(0.5, 3.071, 0, 500, 0.5)]
    [InlineData(0.5, 3.071, 0.5, 88.8, 0.06)]
    [InlineData(0.5, 3.071, 1, 17.5, 0.06)]
    [InlineData(0.03, 2.437, 0, 500, 0.5)]
    [InlineData(0.03, 2.437, 0.5, 29.3, 0.06)]
    [InlineData(0.03, 2.437, 2, 5.99, 0.006)]
    [InlineData(0.25, 3, 1, 11.154267016, 1e-6)]
    [InlineData(0.5, 2, 1.25, 3.59, 0.006)]
    public void Ewma_Published_IsReproduced(double lambda, double limit, double shift, double published, double tolerance) =>
        Assert.Equal(published, RunLengths.Ewma(lambda, limit, shift), tolerance);

    // Gan 1992, The Statistician 41, table 1: drift zero at the first observation (his .005 has it already drifted: 77.17 is right).
    [Theory]
    [InlineData(0.01, 52.0)]
    [InlineData(0.02, 35.2)]
    [InlineData(0.05, 21.4)]
    [InlineData(0.1, 15.0)]
    [InlineData(0.5, 6.95)]
    [InlineData(1, 5.16)]
    public void Drift_FromZero_IsReproduced(double beta, double published) =>
        Assert.Equal(published, RunLengths.Drift(0.25, 8, beta, 0), published * 0.004);

    // Zou et al. 2009, table 1: drifted at the first observation (14.7 for k = .5, beta = .1 is a misprint of 14.0).
    [Theory]
    [InlineData(0.25, 9.66, 0.01, 56.9)]
    [InlineData(0.5, 5.62, 0.01, 61.8)]
    [InlineData(0.75, 3.904, 0.01, 69.3)]
    [InlineData(0.5, 5.62, 0.1, 14.04)]
    [InlineData(0.25, 9.66, 1, 4.63)]
    [InlineData(0.75, 3.904, 1, 3.45)]
    public void Drift_FromFirst_IsReproduced(double k, double h, double beta, double published) =>
        Assert.Equal(published, RunLengths.Drift(k, h, beta, 1), published * 0.004);

    // 20,000 runs: relative standard error 0.7 % in control (sd of the run length is about its mean), less under a shift; 2.5 % allowed.
    [Theory]
    [InlineData(0, 930.89 / 2)]
    [InlineData(1, 10.376)]
    [InlineData(2, 4.009)]
    public void OurRecursion_Simulated_HasTheTablesRunLength(double shift, double expected)
    {
        var random = new MathNet.Numerics.Random.MersenneTwister(11);
        var total = 0L;
        const int Runs = 20_000;
        for (var run = 0; run < Runs; run++)
        {
            Cusum up = default, down = default;
            while (up.Sum <= 5 && down.Sum <= 5)
            {
                var z = MathNet.Numerics.Distributions.Normal.Sample(random, shift, 1);
                up.Add(z, 0.5);
                down.Add(-z, 0.5);
                total++;
            }
        }

        Assert.Equal(expected, total / (double)Runs, expected * 0.025);
    }

    // NIST/SEMATECH e-Handbook 6.3.2.3, tabular CUSUM: target 325, k 0.3175, h 4.1959; NIST prints two decimals.
    [Fact]
    public void Cusum_NistHandbook_NumberForNumber()
    {
        double[] x = [324.925, 324.675, 324.725, 324.350, 325.350, 325.225, 324.125, 324.525, 325.225, 324.600,
            324.625, 325.150, 328.325, 327.250, 327.825, 328.500, 326.675, 327.775, 326.875, 328.350];
        double[] high = [0, 0, 0, 0, 0.0325, 0, 0, 0, 0, 0, 0, 0, 3.0075, 4.94, 7.4475, 10.63, 11.9875, 14.445, 16.0025, 19.035];
        double[] low = [0, 0.0075, 0, 0.3325, 0, 0, 0.5575, 0.715, 0.1725, 0.255, 0.3125, 0, 0, 0, 0, 0, 0, 0, 0, 0];
        Cusum up = default, down = default;
        var firstAlarm = 0;
        for (var i = 0; i < x.Length; i++)
        {
            up.Add(x[i] - 325, 0.3175);
            down.Add(325 - x[i], 0.3175);
            Assert.Equal(high[i], up.Sum, 4);
            Assert.Equal(low[i], down.Sum, 4);
            firstAlarm = firstAlarm == 0 && up.Sum > 4.1959 ? i + 1 : firstAlarm;
        }

        Assert.Equal(14, firstAlarm);
    }

    // Montgomery, Introduction to Statistical Quality Control, table 9.1 (from memory): alarm at 29, seven above zero, new mean 11.25.
    [Fact]
    public void Cusum_Montgomery_GivesOnsetAndNewMean()
    {
        double[] x = [9.45, 7.99, 9.29, 11.66, 12.16, 10.18, 8.04, 11.46, 9.20, 10.34, 9.03, 11.47, 10.51, 9.40, 10.08, 9.37, 10.62, 10.31, 8.52, 10.84,
            10.90, 9.33, 12.29, 11.50, 10.60, 11.08, 10.38, 11.62, 11.31, 10.52];
        Cusum up = default;
        var at = 0;
        while (up.Sum <= 5)
        {
            up.Add(x[at++] - 10, 0.5);
        }

        Assert.Equal(29, at);
        Assert.Equal(7, up.Count);
        Assert.Equal(5.28, up.Sum, 2);
        Assert.Equal(11.25, 10 + 0.5 + (up.Sum / up.Count), 2);
    }

    // Lucas and Crosier 1982 data, as carried in a public test suite: head start 2.5 alarms at 3 instead of 7.
    [Theory]
    [InlineData(0, new[] { 0.3, 1.7, 2.6, 4.1, 4.7, 4.9, 7.0 })]
    [InlineData(2.5, new[] { 2.8, 4.2, 5.1, 6.6, 7.2, 7.4, 9.5 })]
    public void Cusum_HeadStart_FollowsLucasCrosier(double head, double[] expected)
    {
        double[] z = [0.8, 1.9, 1.4, 2.0, 1.1, 0.7, 2.6];
        Cusum up = default;
        up.Start(head);
        for (var i = 0; i < z.Length; i++)
        {
            up.Add(z[i], 0.5);
            Assert.Equal(expected[i], up.Sum, 9);
        }
    }

    // The raw form: alarm when C_n - min C_j > h with C the sum of (z - k). Same instants, always.
    [Fact]
    public void Cusum_RawSumForm_AlarmsAtTheSameReading() => Check.Sample(
        Gen.Double[-3, 4].Array[1, 200],
        values =>
        {
            Cusum up = default;
            var (sum, least) = (0.0, 0.0);
            foreach (var z in values)
            {
                up.Add(z, 0.5);
                sum += z - 0.5;
                least = Math.Min(least, sum);
                Assert.Equal(sum - least, up.Sum, 1e-9);
            }
        },
        iter: 200);
}
