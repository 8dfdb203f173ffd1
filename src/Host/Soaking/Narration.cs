using System.Globalization;
using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Soaking;

/// <summary>How moments and findings are told in prose.</summary>
public static class Narration
{
    /// <summary>A time of a run: 12.3 s, 4 min 05 s, 3 h 07 min.</summary>
    public static string Time(double seconds) => seconds switch
    {
        < 60 => string.Create(CultureInfo.InvariantCulture, $"{seconds:0.0} s"),
        < 3600 => string.Create(CultureInfo.InvariantCulture, $"{Math.Floor(seconds / 60):0} min {Math.Floor(seconds % 60):00} s"),
        _ => string.Create(CultureInfo.InvariantCulture, $"{Math.Floor(seconds / 3600):0} h {Math.Floor(seconds % 3600 / 60):00} min"),
    };

    /// <summary>A current: 412 mA, 1.25 A.</summary>
    public static string Amps(double amps) => amps < 0.9995
        ? string.Create(CultureInfo.InvariantCulture, $"{amps * 1000:0.#} mA")
        : string.Create(CultureInfo.InvariantCulture, $"{amps:0.00} A");

    /// <summary>One line for one change of a finding.</summary>
    public static string Line(double seconds, FindingChange change)
    {
        var finding = change.Finding;
        var what = change.Kind switch
        {
            ChangeKind.Raised => finding.Severity.Text().ToUpperInvariant(),
            ChangeKind.Amended => $"now {finding.Severity.Text()}",
            _ => "cleared",
        };
        return $"{Time(seconds)}: {what}: {finding.Signature.Text()} (since {Time(finding.OnsetSeconds)}). {finding.Explanation}";
    }
}
