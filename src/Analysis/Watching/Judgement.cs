namespace Lampwarden.Analysis.Watching;

/// <summary>What a run says about the unit, with the reasons.</summary>
/// <param name="Verdict">Passed, failed or incomplete.</param>
/// <param name="Reasons">Plain sentences, the weightiest first; never empty.</param>
/// <param name="Summary">Numbers of the run; camelCase, the unit last; NaN is written as null.</param>
public sealed record Judgement(Verdict Verdict, IReadOnlyList<string> Reasons, IReadOnlyDictionary<string, double> Summary);

/// <summary>How far the watch has come.</summary>
public enum WatchPhase
{
    /// <summary>Filaments and unit are still coming up after switch-on; only absolute limits speak.</summary>
    Settling,

    /// <summary>The unit's own level, warm-up and answer to the mains are being learned; sudden faults and absolute limits speak.</summary>
    Learning,

    /// <summary>Everything speaks.</summary>
    Watching,
}

/// <summary>A stretch without readings.</summary>
/// <param name="FromSeconds">The last reading before it.</param>
/// <param name="ToSeconds">The first reading after it, or the end of what is known.</param>
/// <param name="Reason">Why, as far as the watch can tell: <c>silent</c> or <c>overload</c>.</param>
public sealed record WatchGap(double FromSeconds, double ToSeconds, string Reason);
