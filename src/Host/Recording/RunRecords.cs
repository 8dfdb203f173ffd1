using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Recording;

/// <summary>One line of the list of runs.</summary>
/// <param name="Run">Its id: the UTC day it began and a number within the day, such as 20260402-003.</param>
/// <param name="EndedUtc">Null while the run goes on.</param>
/// <param name="Readings">Readings stored, overloads included, missed polls not.</param>
/// <param name="Lost">Entries that could not be stored.</param>
/// <param name="Verdict">Null while the run goes on.</param>
/// <param name="Findings">How many findings the run had.</param>
public sealed record RunInfo(
    string Run,
    string Bench,
    string Unit,
    string Bank,
    string Mains,
    string? UnitLabel,
    double PlannedHours,
    DateTimeOffset StartedUtc,
    DateTimeOffset? EndedUtc,
    double LengthSeconds,
    long Readings,
    long Lost,
    Verdict? Verdict,
    int Findings,
    string? ResumedFrom,
    string Software);

/// <summary>Everything about one run but its readings and the bytes of its attachments.</summary>
public sealed record RunRecord(
    RunInfo Info,
    string ConfigurationJson,
    string? PredictionJson,
    IReadOnlyList<string> Reasons,
    string? SummaryJson,
    IReadOnlyList<StoredGap> Gaps,
    IReadOnlyList<StoredFindingChange> FindingChanges,
    IReadOnlyList<StoredAlertChange> AlertChanges,
    IReadOnlyList<Note> Notes,
    IReadOnlyList<AttachmentInfo> Attachments)
{
    /// <summary>What the watch was told during the run, in order.</summary>
    public IReadOnlyList<StoredAnnouncement> Announcements { get; init; } = [];

    /// <summary>Every finding of the run in its latest form, by number.</summary>
    [System.Text.Json.Serialization.JsonIgnore]
    public IReadOnlyList<Finding> Findings { get; } =
        [.. FindingChanges.GroupBy(change => change.Change.Finding.Number).OrderBy(group => group.Key).Select(group => group.Last().Change.Finding)];
}

/// <summary>A time without readings. Misses with one reason and no reading between them are one gap.</summary>
/// <param name="FromSeconds">Seconds since the run began.</param>
/// <param name="Polls">How many polls were missed.</param>
/// <param name="Reason">Kebab-case, such as no-answer; not-stored where the store itself lost the readings.</param>
public sealed record StoredGap(double FromSeconds, double ToSeconds, string Reason, string? Detail, long Polls);

/// <summary>A finding change and when it was seen, in seconds since the run began.</summary>
public sealed record StoredFindingChange(double Seconds, FindingChange Change);

/// <summary>Something that a person, or a bring-up, told the watch.</summary>
/// <param name="Seconds">Seconds since the run began; told after the reading of that time and before the next.</param>
/// <param name="Kind">Kebab-case, such as load-changed.</param>
/// <param name="Detail">The person's words, or the bank.</param>
/// <param name="ExpectationJson">The new prediction; null where there is none.</param>
public sealed record StoredAnnouncement(double Seconds, string Kind, string? Detail = null, string? ExpectationJson = null);

/// <summary>One step in the life of an alert.</summary>
/// <param name="Seconds">Seconds since the run began.</param>
/// <param name="Utc">Wall time of the step.</param>
/// <param name="Alert">Id of the alert, unique within the run.</param>
/// <param name="Transition">What happened: raised, acknowledged, cleared, shelved, told by a route…</param>
/// <param name="State">The state the alert is in afterwards.</param>
/// <param name="By">Who or what did it; null for the watch itself.</param>
/// <param name="Text">For people.</param>
/// <param name="Json">Anything else, as a JSON document.</param>
public sealed record StoredAlertChange(
    double Seconds,
    DateTimeOffset Utc,
    string Alert,
    string Transition,
    string State,
    string? By = null,
    string? Text = null,
    string? Json = null);

/// <summary>Something a person wrote about a run.</summary>
public sealed record Note(DateTimeOffset Utc, string? Author, string Text, double? AtSeconds = null);

/// <summary>A file kept with a run.</summary>
public sealed record AttachmentInfo(string Name, string MediaType, DateTimeOffset Utc, long Bytes, string Sha256);

/// <summary>Which runs to list; null does not narrow.</summary>
/// <param name="Unit">Unit text or label, whole or in part.</param>
/// <param name="FromUtc">Begun at this time or later.</param>
/// <param name="ToUtc">Begun before this time.</param>
public sealed record RunFilter(
    string? Bench = null,
    string? Unit = null,
    DateTimeOffset? FromUtc = null,
    DateTimeOffset? ToUtc = null,
    Verdict? Verdict = null,
    int Most = int.MaxValue);

/// <summary>How a run ended.</summary>
/// <param name="SummaryJson">The judgement's numbers as a JSON object.</param>
public sealed record RunEnd(Verdict Verdict, IReadOnlyList<string> Reasons, string? SummaryJson = null, double? EndSeconds = null);

/// <summary>One bucket of a window. Numbers are NaN where no reading fell into it.</summary>
/// <param name="Count">Readings with a number; overloads and missed polls are counted apart.</param>
public readonly record struct Bucket(
    double FromSeconds,
    double ToSeconds,
    int Count,
    double MinAmps,
    double MaxAmps,
    double MeanAmps,
    double MinVolts,
    double MaxVolts,
    double MeanVolts,
    int Overloads,
    int Missing);

/// <summary>A stretch of a run in a bounded number of buckets, with the gaps that touch it.</summary>
/// <param name="BucketSeconds">Width of every bucket.</param>
public sealed record RunWindow(double FromSeconds, double ToSeconds, double BucketSeconds, IReadOnlyList<Bucket> Buckets, IReadOnlyList<StoredGap> Gaps);
