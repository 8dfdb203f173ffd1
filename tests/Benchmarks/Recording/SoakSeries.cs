using Lampwarden.Host.Recording;

namespace Lampwarden.Benchmarks.Recording;

/// <summary>Settled runs to store: a current that wanders with the mains and the warm-up, noise as a six-digit meter has it, and arrival times with jitter.</summary>
internal static class SoakSeries
{
    /// <param name="noiseCounts">Standard deviation of the noise in counts of 1 uA.</param>
    /// <param name="jitterMs">Standard deviation of the arrival times in ms.</param>
    public static IEnumerable<LineReading> Settled(double hours, double perSecond, double noiseCounts, double jitterMs, int seed = 7)
    {
        var random = new Random(seed);
        var wander = 0.0;
        for (long i = 0; i < hours * 3600 * perSecond; i++)
        {
            var seconds = i / perSecond;
            wander = (wander * 0.99995) + (Gauss(random) * 2e-6);
            var amps = 0.412345 + wander + (0.004 * Math.Exp(-seconds / 4000)) + (Gauss(random) * noiseCounts * 1e-6);
            yield return new LineReading(Math.Max(0, seconds + (Gauss(random) * jitterMs * 1e-3)), Math.Round(amps, 6), 6);
        }
    }

    private static double Gauss(Random random) =>
        Math.Sqrt(-2 * Math.Log(1 - random.NextDouble())) * Math.Cos(2 * Math.PI * random.NextDouble());
}
