using Lampwarden.Analysis.Watching;

namespace Lampwarden.Analysis.Tests.Watching;

/// <summary>A hand-made series of readings: 2 a second, a level that a function of time gives, and a small repeatable noise.</summary>
internal static class Series
{
    public const double Rate = 2;

    public static IEnumerable<Observation> Of(double seconds, Func<double, double> amps, double noiseShare = 0.002, Func<double, double>? volts = null, double rate = Rate)
    {
        var random = new Random(7);
        for (var i = 0; i < seconds * rate; i++)
        {
            var t = i / rate;
            // Sum of uniforms: near normal, bounded, and the same on every machine for a seeded Random.
            var noise = (random.NextDouble() + random.NextDouble() + random.NextDouble() - 1.5) * 2 * noiseShare;
            yield return new Observation(t, amps(t) * (1 + noise), volts?.Invoke(t) ?? double.NaN);
        }
    }

    public static List<FindingChange> Feed(this Watch watch, IEnumerable<Observation> series)
    {
        var changes = new List<FindingChange>();
        foreach (var o in series)
        {
            changes.AddRange(watch.Observe(o));
        }

        return changes;
    }
}
