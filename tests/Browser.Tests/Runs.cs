using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;

namespace Lampwarden.Browser.Tests;

/// <summary>Runs of our own invention, put into a store.</summary>
internal static class Runs
{
    public static async Task<string> StoreAsync(SoakStore store, double hours, string bench = "attic", double amps = 0.31)
    {
        var recorder = await store.BeginRunAsync(new RunStart { Bench = bench, Unit = "resistor 300 ohm", Bank = "60 W", Mains = "120 V 60 Hz", PlannedHours = hours });
        for (var half = 0; half < hours * 7200; half++)
        {
            var seconds = half / 2.0;
            recorder.Append(new LineReading(seconds, Math.Round(half == 0 ? 1.2 : amps + (0.004 * Math.Sin(seconds / 300)) + (0.001 * Math.Sin(seconds * 9)), 4), 4));
        }

        var finding = new Finding(1, Signature.DevelopingShort, Severity.Warning, hours * 1800, hours * 1900, null, "The current crept up.", new Dictionary<string, double>());
        recorder.AppendFinding(hours * 1900, new FindingChange(ChangeKind.Raised, finding));
        await recorder.EndAsync(new RunEnd(Verdict.Failed, ["A developing short was found."]));
        return recorder.Run;
    }
}
