using System.Globalization;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Reporting;

/// <summary>One figure of two runs. Difference in percent of the first; NaN where either is missing.</summary>
public sealed record ComparedFigure(string Name, string Unit, double First, double Second)
{
    public double DifferencePercent => 100 * (Second - First) / First;
}

/// <summary>Two runs side by side, with sentences that say which differences the circumstances explain and which they do not.</summary>
public sealed record RunComparison(RunInfo First, RunInfo Second, IReadOnlyList<ComparedFigure> Figures, IReadOnlyList<string> Remarks)
{
    // Line current of a lamp-limited healthy unit against mains, d ln I / d ln V: between 0.5 and 0.6 by the lamps alone
    // (exponents of general-service lamps, measured-characteristic papers), used where nothing better is known.
    private const double MainsExponent = 0.55;

    // Below this nobody should look for a cause: two meters of 1 % and two sets of lamps differ as much.
    private const double UnremarkablePercent = 3;

    /// <summary>Compares two runs of a store.</summary>
    public static RunComparison Of(SoakStore store, string first, string second)
    {
        var (one, two) = (store.Run(first), store.Run(second));
        var (a, b) = (RunFigures.Of(store, first), RunFigures.Of(store, second));
        var figures = new List<ComparedFigure>
        {
            new("firstReading", "A", a.FirstAmps, b.FirstAmps),
            new("peakOfFirstMinute", "A", a.PeakAmps, b.PeakAmps),
            new("settle", "s", a.SettleSeconds, b.SettleSeconds),
            new("settled", "A", a.SettledAmps, b.SettledAmps),
            new("end", "A", a.EndAmps, b.EndAmps),
            new("drift", "A/h", a.DriftAmpsPerHour, b.DriftAmpsPerHour),
            new("noise", "A", a.NoiseAmps, b.NoiseAmps),
            new("mains", "V", a.MainsVolts, b.MainsVolts),
            new("length", "h", a.LengthSeconds / 3600, b.LengthSeconds / 3600),
            new("findings", "", one.Findings.Count, two.Findings.Count),
        };
        return new RunComparison(one.Info, two.Info, figures, [.. RemarksOn(one, two, a, b)]);
    }

    private static IEnumerable<string> RemarksOn(RunRecord one, RunRecord two, RunFigures a, RunFigures b)
    {
        var sameCircuit = true;
        foreach (var (what, left, right) in new[] { ("bank", one.Info.Bank, two.Info.Bank), ("mains", one.Info.Mains, two.Info.Mains), ("unit", one.Info.Unit, two.Info.Unit) })
        {
            if (left != right)
            {
                sameCircuit = false;
                yield return $"The {what} differs: {left} against {right}. Currents of the two runs cannot be compared as they stand.";
            }
        }

        var difference = 100 * (b.SettledAmps - a.SettledAmps) / a.SettledAmps;
        if (double.IsNaN(difference))
        {
            yield return "At least one run never settled, so there is no steady current to compare.";
        }
        else if (sameCircuit)
        {
            yield return Explain(difference, 100 * MainsExponent * Math.Log(b.MainsVolts / a.MainsVolts));
        }

        if (b.SettleSeconds > 2 * a.SettleSeconds && b.SettleSeconds > a.SettleSeconds + 5)
        {
            yield return Text($"{two.Info.Run} took {b.SettleSeconds:0.0} s to settle against {a.SettleSeconds:0.0} s: look at its reservoir capacitors and at anything that must charge or start.");
        }

        foreach (var finding in two.Findings.Where(finding => one.Findings.All(other => other.Signature != finding.Signature)))
        {
            yield return Text($"Only {two.Info.Run} had the finding {finding.Signature.Text()} (from {finding.OnsetSeconds:0} s on).");
        }
    }

    private static string Explain(double differencePercent, double mainsPercent)
    {
        var rest = differencePercent - (double.IsNaN(mainsPercent) ? 0 : mainsPercent);
        var told = Text($"Settled, the second takes {differencePercent:+0.0;-0.0} % of the first's current.");
        var mains = double.IsNaN(mainsPercent)
            ? "Mains was not measured in both runs, so what of it the mains explains is unknown."
            : Text($"The mains explains {mainsPercent:+0.0;-0.0;0.0} % of that.");
        var left = Math.Abs(rest) <= UnremarkablePercent
            ? Text($"What is left, {rest:+0.0;-0.0;0.0} %, lies within what two meters and two sets of lamps differ by.")
            : rest > 0
                ? Text($"What is left, {rest:+0.0;-0.0} %, is the unit's: it loads the bank more than the first (a leaky part, a shorted turn, a heavier load).")
                : Text($"What is left, {rest:+0.0;-0.0} %, is the unit's or the bank's: a part of the unit does not run, or a lamp is weaker.");
        return $"{told} {mains} {left}";
    }

    private static string Text(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
