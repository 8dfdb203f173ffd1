using System.Globalization;
using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Soaking;

/// <summary>Tells a rehearsal to its reader as it goes on: switch-on beside its prediction, the quiet soak, findings, verdict.</summary>
public sealed class RehearsalNarrator(TextWriter prose, BenchPlan plan) : ISoakListener
{
    private const double QuietEverySeconds = 300;
    private const double AmendedEverySeconds = 60;
    private readonly Dictionary<int, (Signature Signature, Severity Severity, double Seconds)> _told = [];
    private bool _waiting;
    private long _looks;
    private double _settledAt = double.NaN;
    private double _nextQuiet = QuietEverySeconds;
    private double _lastAmps = double.NaN;

    /// <summary>Line current when the first alert was raised; NaN while none was.</summary>
    public double AmpsAtFirstAlert { get; private set; } = double.NaN;

    /// <inheritdoc/>
    public void Hear(SoakEvent happened)
    {
        switch (happened)
        {
            case MeterFound found:
                Say($"The service has opened meter '{found.Meter}'{(found.Identity is null ? "" : $"; it says it is {found.Identity}")}.");
                break;
            case MeterLost lost:
                Say($"Meter '{lost.Meter}' gives no reading: {lost.Reason}. {lost.Detail}");
                break;
            case WaitingForSwitchOn when !_waiting:
                _waiting = true;
                Say("No current yet: waiting for switch-on.");
                break;
            case Observed observed:
                Follow(observed);
                break;
            case FindingChanged changed when IsNews(changed):
                Say(Narration.Line(changed.Seconds, changed.Change));
                break;
            case AlertChanged alert when alert.Change.What == "raised" && double.IsNaN(AmpsAtFirstAlert):
                AmpsAtFirstAlert = _lastAmps;
                Say(string.Create(CultureInfo.InvariantCulture,
                    $"  The alert is stored and told at {Narration.Amps(_lastAmps)}, {_lastAmps / plan.Prediction.Shorted.LineAmps:P0} of what a full short would draw."));
                break;
            case RunEnded ended:
                Say($"{Narration.Time(ended.Seconds)}: the run is closed. Verdict: {ended.Judgement.Verdict.Text().ToUpperInvariant()}.");
                foreach (var reason in ended.Judgement.Reasons)
                {
                    Say("  " + reason);
                }

                break;
        }
    }

    /// <summary>A finding is amended with every turn of the evidence; the reader wants a new name, a new severity, or a minute's news.</summary>
    private bool IsNews(FindingChanged changed)
    {
        var finding = changed.Change.Finding;
        if (changed.Change.Kind == ChangeKind.Amended
            && _told.TryGetValue(finding.Number, out var told)
            && (told.Signature, told.Severity) == (finding.Signature, finding.Severity)
            && changed.Seconds - told.Seconds < AmendedEverySeconds)
        {
            return false;
        }

        _told[finding.Number] = (finding.Signature, finding.Severity, changed.Seconds);
        return true;
    }

    private void Follow(Observed observed)
    {
        var (seconds, amps) = (observed.Observation.Seconds, observed.Observation.LineAmps);
        if (double.IsNaN(amps))
        {
            return;
        }

        _lastAmps = amps;
        _looks++;
        var predicted = plan.Prediction;
        if (_looks <= 2)
        {
            Say(string.Create(CultureInfo.InvariantCulture,
                $"{Narration.Time(seconds)}: switch-on, the meter shows {Narration.Amps(amps)}{(_looks == 1 ? $" (predicted for the first reading: up to {Narration.Amps(predicted.Inrush.FirstReadingAmps)}; the peak itself, {Narration.Amps(predicted.Inrush.PeakAmps)}, no meter can show)" : "")}."));
        }

        if (double.IsNaN(_settledAt) && observed.Phase != WatchPhase.Settling)
        {
            _settledAt = seconds;
            Say($"{Narration.Time(seconds)}: settled at {Narration.Amps(amps)}; predicted {Narration.Amps(predicted.Steady.LineAmps)}, band {Narration.Amps(predicted.Band.LowAmps)} to {Narration.Amps(predicted.Band.HighAmps)}.");
        }

        if (seconds >= _nextQuiet)
        {
            _nextQuiet += QuietEverySeconds;
            if (double.IsNaN(AmpsAtFirstAlert))
            {
                Say($"{Narration.Time(seconds)}: soaking, {Narration.Amps(amps)}, nothing found.");
            }
        }
    }

    private void Say(string line)
    {
        prose.WriteLine(line);
        prose.Flush();
    }
}
