using static System.FormattableString;

namespace Lampwarden.Analysis.Watching;

/// <summary>Turns a finished run into a verdict with reasons.</summary>
internal static class Judge
{
    public static Judgement Decide(
        WatchSettings settings, IReadOnlyList<Finding> findings, double endSeconds, double gapSeconds, long readings, double levelAmps, double referenceAmps)
    {
        var reasons = new List<string>();
        var verdict = Verdict.Passed;
        foreach (var finding in findings.OrderByDescending(finding => finding.Severity).ThenBy(finding => finding.Number))
        {
            if (SpeaksAgainstUnit(finding))
            {
                verdict = Verdict.Failed;
                reasons.Add(Invariant($"{finding.Signature.Text()} from {Clock(finding.OnsetSeconds)}: {finding.Explanation}"));
            }
        }

        var percent = ((levelAmps / referenceAmps) - 1) * 100;
        if (Math.Abs(percent) > settings.Acceptance.SteadyWithinPercent)
        {
            verdict = Verdict.Failed;
            var reference = settings.Expectation is null ? "its level after warm-up," : "the predicted";
            reasons.Add(Invariant($"The steady current was {Advice.Amps(levelAmps)}, {percent:+0.#;-0.#} % from {reference} {Advice.Amps(referenceAmps)}; allowed are {settings.Acceptance.SteadyWithinPercent:0.#} %."));
        }

        var covered = endSeconds > 0 ? Math.Clamp(1 - gapSeconds / endSeconds, 0, 1) : 0;
        var hours = endSeconds / 3600;
        if (verdict != Verdict.Failed)
        {
            if (readings == 0)
            {
                reasons.Add("No reading came, so nothing can be said about the unit.");
            }

            foreach (var finding in findings.Where(IsOfBank))
            {
                reasons.Add(Invariant($"The limiter itself failed at {Clock(finding.OnsetSeconds)}: {finding.Explanation}"));
            }

            if (settings.PlannedHours is { } planned && hours < planned * 0.999)
            {
                reasons.Add(Invariant($"The soak lasted {hours:0.##} h of the planned {planned:0.##} h."));
            }

            if (covered < settings.Acceptance.LeastCoverageShare)
            {
                reasons.Add(Invariant($"Readings cover {covered * 100:0.#} % of the time; at least {settings.Acceptance.LeastCoverageShare * 100:0.#} % are asked for."));
            }

            verdict = reasons.Count > 0 ? Verdict.Incomplete : Verdict.Passed;
        }

        if (verdict == Verdict.Passed)
        {
            reasons.Add(Invariant($"No finding speaks against the unit in {hours:0.##} h, with readings for {covered * 100:0.#} % of the time and a steady current of {Advice.Amps(levelAmps)}."));
        }

        return new Judgement(verdict, reasons, new Dictionary<string, double>
        {
            ["soakHours"] = hours,
            ["readings"] = readings,
            ["coveredPercent"] = covered * 100,
            ["gapSeconds"] = gapSeconds,
            ["steadyAmps"] = levelAmps,
            ["expectedAmps"] = referenceAmps,
            ["findings"] = findings.Count,
        });
    }

    /// <summary>A warning or worse about anything but the meter and the mains fails the unit, cleared or not: a fault that came and went is a fault.</summary>
    private static bool SpeaksAgainstUnit(Finding finding) => finding.Severity >= Severity.Warning && finding.Signature
        is not (Signature.MeterSilent or Signature.MeterStuck or Signature.MeterOverload or Signature.MainsShift) && !IsOfBank(finding);

    /// <summary>A lamp known by name has gone dark: the limiter's fault, not the unit's, but the soak was not the one planned.</summary>
    private static bool IsOfBank(Finding finding) =>
        finding.Signature == Signature.LampOut && finding.Severity >= Severity.Warning && finding.Evidence.ContainsKey("lampPredictedAmps");

    private static string Clock(double seconds) => Invariant($"{(int)(seconds / 3600)}:{(int)(seconds / 60) % 60:00}:{(int)seconds % 60:00}");
}
