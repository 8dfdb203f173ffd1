using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Soaking;

/// <summary>What came of a run: the JSON document of <c>replay</c>, and of <c>watch</c> and <c>rehearse</c> with run and record named.</summary>
/// <param name="Readings">Numbers and overloads taken, gaps not counted.</param>
/// <param name="Gaps">Times without readings, each with its reason.</param>
/// <param name="Findings">Every finding in its latest form, oldest first.</param>
/// <param name="Verdict">What it says about the unit.</param>
/// <param name="Summary">Numbers of the run, and the reasons of the verdict in words.</param>
public sealed record SoakDocument(
    long Readings,
    IReadOnlyList<Gap> Gaps,
    IReadOnlyList<FindingEntry> Findings,
    Verdict Verdict,
    IReadOnlyDictionary<string, object> Summary)
{
    /// <summary>The run's id in the store; null for a replayed file.</summary>
    [System.Text.Json.Serialization.JsonIgnore(Condition = System.Text.Json.Serialization.JsonIgnoreCondition.WhenWritingNull)]
    public string? Run { get; init; }

    /// <summary>Path of the store; null for a replayed file.</summary>
    [System.Text.Json.Serialization.JsonIgnore(Condition = System.Text.Json.Serialization.JsonIgnoreCondition.WhenWritingNull)]
    public string? Record { get; init; }
}

/// <summary>A finding as the JSON contract writes it.</summary>
public sealed record FindingEntry(
    Signature Signature,
    Severity Severity,
    double OnsetSeconds,
    double RaisedSeconds,
    double? ClearedSeconds,
    string Explanation,
    IReadOnlyDictionary<string, double> Evidence)
{
    /// <summary>The entry of a finding.</summary>
    public static FindingEntry Of(Finding finding) => new(
        finding.Signature, finding.Severity, finding.OnsetSeconds, finding.RaisedSeconds, finding.ClearedSeconds, finding.Explanation, finding.Evidence);
}
