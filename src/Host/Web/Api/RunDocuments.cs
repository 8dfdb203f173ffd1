using System.Text.Json;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Soaking;

namespace Lampwarden.Host.Web.Api;

/// <summary>One line of the list of runs: that of <c>runs --json</c>, with what a list on a page also shows.</summary>
public sealed record RunLine(
    string Run,
    string Bench,
    string Unit,
    string? UnitLabel,
    string Bank,
    string Mains,
    DateTimeOffset StartedUtc,
    DateTimeOffset? EndedUtc,
    double LengthSeconds,
    double PlannedHours,
    long Readings,
    Verdict? Verdict,
    int Findings,
    string? ResumedFrom)
{
    internal static RunLine Of(RunInfo info) => new(
        info.Run, info.Bench, info.Unit, info.UnitLabel, info.Bank, info.Mains, info.StartedUtc, info.EndedUtc,
        info.LengthSeconds, info.PlannedHours, info.Readings, info.Verdict, info.Findings, info.ResumedFrom);
}

/// <summary>One run with all but its readings.</summary>
public sealed record RunDocument(
    string Run,
    string Bench,
    string Unit,
    string? UnitLabel,
    string Bank,
    string Mains,
    DateTimeOffset StartedUtc,
    DateTimeOffset? EndedUtc,
    double LengthSeconds,
    double PlannedHours,
    long Readings,
    long Lost,
    string Software,
    string? ResumedFrom,
    Verdict? Verdict,
    IReadOnlyList<string> Reasons,
    JsonElement? Summary,
    JsonElement? Prediction,
    IReadOnlyList<FindingEntry> Findings,
    IReadOnlyList<StoredGap> Gaps,
    IReadOnlyList<AlertStep> Alerts,
    IReadOnlyList<Note> Notes,
    IReadOnlyList<AttachmentInfo> Attachments)
{
    internal static RunDocument Of(RunRecord record)
    {
        var info = record.Info;
        return new(
            info.Run, info.Bench, info.Unit, info.UnitLabel, info.Bank, info.Mains, info.StartedUtc, info.EndedUtc,
            info.LengthSeconds, info.PlannedHours, info.Readings, info.Lost, info.Software, info.ResumedFrom, info.Verdict,
            record.Reasons, Parse(record.SummaryJson), Parse(record.PredictionJson),
            [.. record.Findings.Select(FindingEntry.Of)], record.Gaps,
            [.. record.AlertChanges.Select(change => new AlertStep(change.Seconds, change.Utc, change.Alert, change.Transition, change.State, change.By, change.Text))],
            record.Notes, record.Attachments);
    }

    private static JsonElement? Parse(string? json) => json is null ? null : JsonSerializer.Deserialize<JsonElement>(json);
}

/// <summary>One step in the life of an alert, as recorded.</summary>
public sealed record AlertStep(double Seconds, DateTimeOffset Utc, string Alert, string Transition, string State, string? By, string? Text);

/// <summary>A stretch of a run in columns, for drawing.</summary>
/// <param name="FromSeconds">Where it begins: at or shortly before what was asked for.</param>
/// <param name="ToSeconds">Where it ends.</param>
/// <param name="BucketSeconds">Length of a bucket.</param>
/// <param name="Seconds">Start of each bucket that has a reading or begins a gap, ascending.</param>
/// <param name="LowAmps">Least reading; NaN (null) where a gap begins.</param>
/// <param name="MeanAmps">Mean.</param>
/// <param name="HighAmps">Greatest.</param>
/// <param name="MeanVolts">Mean of the mains; NaN (null) where it was not measured.</param>
public sealed record SeriesDocument(
    double FromSeconds, double ToSeconds, double BucketSeconds, double[] Seconds, double[] LowAmps, double[] MeanAmps, double[] HighAmps, double[] MeanVolts)
{
    internal static SeriesDocument Of(RunWindow window)
    {
        var shown = new List<Bucket>(window.Buckets.Count);
        var inGap = true;
        foreach (var bucket in window.Buckets)
        {
            if (bucket.Count > 0)
            {
                shown.Add(bucket);
                inGap = false;
            }
            else if (!inGap && (bucket.Missing > 0 || bucket.Overloads > 0 || IsInGap(window, bucket)))
            {
                // An empty bucket between two slow readings is no gap; one without an answer is.
                shown.Add(bucket);
                inGap = true;
            }
        }

        return new SeriesDocument(
            window.FromSeconds, window.ToSeconds, window.BucketSeconds,
            Column(shown, bucket => bucket.FromSeconds), Column(shown, bucket => bucket.MinAmps), Column(shown, bucket => bucket.MeanAmps),
            Column(shown, bucket => bucket.MaxAmps), Column(shown, bucket => bucket.MeanVolts));
    }

    private static bool IsInGap(RunWindow window, Bucket bucket) =>
        window.Gaps.Any(gap => gap.FromSeconds < bucket.FromSeconds && gap.ToSeconds > bucket.ToSeconds);

    private static double[] Column(List<Bucket> buckets, Func<Bucket, double> value) => [.. buckets.Select(value)];
}
