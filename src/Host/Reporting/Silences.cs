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
        record = record with { Gaps = [.. record.Gaps.Select(gap => SinceEarlierRun(store, record, gap))] };
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

    // A run that carries on another keeps its clock: what came before it is that one's, and only the time between is a gap.
    private static StoredGap SinceEarlierRun(SoakStore store, RunRecord record, StoredGap gap)
    {
        if (gap.FromSeconds > 0 || record.Info.ResumedFrom is not { } id || store.Runs().FirstOrDefault(run => run.Run == id) is not { } earlier)
        {
            return gap;
        }

        return earlier.StartedUtc == record.Info.StartedUtc ? gap with { FromSeconds = Math.Min(earlier.LengthSeconds, gap.ToSeconds) } : gap;
    }

    private static double LongestStep(SoakStore store, string run)
    {
        var first = store.Readings(run).Take(1000).Select(reading => reading.Seconds).ToList();
        var steps = first.Zip(first.Skip(1), (before, after) => after - before).Order().ToList();
        return steps.Count == 0 ? double.PositiveInfinity : Math.Max(LeastSeconds, Polls * steps[steps.Count / 2]);
    }
}
