namespace Lampwarden.Analysis.Watching;

/// <summary>A signature seen in the readings, with when it began, what it rests on and what to look at first.</summary>
/// <param name="Number">Counts from 1 within a run. An amended or cleared finding keeps its number.</param>
/// <param name="Signature">The likeliest class so far.</param>
/// <param name="Severity">How soon somebody has to look.</param>
/// <param name="OnsetSeconds">When it began, in seconds since the run began; estimated, so before <paramref name="RaisedSeconds"/>.</param>
/// <param name="RaisedSeconds">The observation that raised it.</param>
/// <param name="ClearedSeconds">The observation that cleared it; null while it stands.</param>
/// <param name="Explanation">One sentence of plain advice: what is seen, what is likeliest, what to look at first.</param>
/// <param name="Evidence">The numbers it rests on; names in camelCase with the unit as last word. NaN is written as null.</param>
public sealed record Finding(
    int Number,
    Signature Signature,
    Severity Severity,
    double OnsetSeconds,
    double RaisedSeconds,
    double? ClearedSeconds,
    string Explanation,
    IReadOnlyDictionary<string, double> Evidence);

/// <summary>What happened to a finding at one observation.</summary>
public enum ChangeKind
{
    Raised,
    Amended,
    Cleared,
}

/// <summary>One step in the life of a finding.</summary>
public readonly record struct FindingChange(ChangeKind Kind, Finding Finding);
