using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Reporting;

/// <summary>
/// Times without readings that nobody gave a reason for: longer than a few polls, and covered by no stored gap. A program that
/// was itself held up misses polls without knowing of them, and a report must not call that time watched.
/// </summary>
internal static class Silences
{
    /// <summary>The reason such a gap is given.</summary>
    public const string Reason = "not-polled";

    private const double Polls = 3;
    private const double LeastSeconds = 1;

    /// <summary>A run's stored gaps and its silences together, in order of time.</summary>
    public static IReadOnlyList<StoredGap> AllGaps(SoakStore store, RunRecord record)
    {
        var silences = new List<StoredGap>();
        var last = double.NaN;
        var longest = LongestStep(store, record.Info.Run);
        foreach (var reading in store.Readings(record.Info.Run))
        {
            if (reading.Seconds - last > longest && !record.Gaps.Any(gap => gap.FromSeconds < reading.Seconds && gap.ToSeconds > last))
            {
                silences.Add(new StoredGap(last, reading.Seconds, Reason, "the program itself was held up and asked no meter", 0));
            }

            last = reading.Seconds;
        }

        return [.. record.Gaps.Concat(silences).OrderBy(gap => gap.FromSeconds)];
    }

    private static double LongestStep(SoakStore store, string run)
    {
        var first = store.Readings(run).Take(1000).Select(reading => reading.Seconds).ToList();
        var steps = first.Zip(first.Skip(1), (before, after) => after - before).Order().ToList();
        return steps.Count == 0 ? double.PositiveInfinity : Math.Max(LeastSeconds, Polls * steps[steps.Count / 2]);
    }
}
