using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting.Life;

namespace Lampwarden.Host.Alerting;

/// <summary>
/// Keeps the alerts of one run: turns changes of findings, what people do, and the passing of time into alert state
/// changes. Time enters as seconds only, so a run replays. Not thread-safe: owned by the soak's loop.
/// </summary>
public sealed partial class AlertBook(string bench, AlertRules? rules = null)
{
    private readonly AlertRules _rules = rules ?? new AlertRules();
    private readonly List<AlertEntry> _entries = [];
    private readonly Dictionary<int, AlertEntry> _byFinding = [];
    private readonly List<AlertChange> _later = [];
    private ChatterGuard? _chatter;
    private int _numbers;

    /// <summary>Every alert of the run in its latest state, in the order of their numbers.</summary>
    public IReadOnlyCollection<Alert> Alerts => [.. _entries.Where(entry => !entry.IsPending).Select(entry => entry.Alert)];

    /// <summary>Takes one change of a finding.</summary>
    /// <returns>
    /// The alert's change; null where a notice asks nobody to act, where nothing changed that a person must hear,
    /// or where a delay has to pass first (<see cref="Tick"/> then brings it).
    /// </returns>
    public AlertChange? Take(FindingChange change, double seconds)
    {
        var finding = change.Finding;
        var known = _byFinding.TryGetValue(finding.Number, out var entry);
        if (change.Kind == ChangeKind.Cleared)
        {
            return known ? Gone(entry!, seconds) : null;
        }

        if (!known && finding.Severity == Severity.Notice)
        {
            return null;
        }

        var cause = finding.Signature.Text();
        if (!known)
        {
            entry = Find(cause, seconds);
            _byFinding[finding.Number] = entry;
            entry.Alert = entry.Alert with { FindingNumber = finding.Number };
        }

        return Stands(entry!, cause, finding.Severity, finding.Explanation, seconds, comes: !known);
    }

    /// <summary>Says that a condition with no finding behind it stands, such as a dead route.</summary>
    /// <returns>As for <see cref="Take"/>.</returns>
    public AlertChange? Raise(string cause, Severity severity, string text, double seconds)
    {
        var standing = _entries.Find(entry => entry.Alert.Cause == cause && entry.Alert.Standing && entry.Alert.FindingNumber is null && SameSubject(entry, text));
        return Stands(standing ?? Find(cause, seconds), cause, severity, text, seconds, comes: standing is null);
    }

    /// <summary>Says that such a condition is gone.</summary>
    /// <param name="cause">As raised.</param>
    /// <param name="seconds">Now.</param>
    /// <param name="startOfText">Which one, where several of one cause stand: how its text begins.</param>
    public AlertChange? Clear(string cause, double seconds, string startOfText = "") =>
        _entries.Find(entry => entry.Alert.Cause == cause && entry.Alert.Standing && entry.Alert.FindingNumber is null
            && entry.Alert.Text.StartsWith(startOfText, StringComparison.Ordinal)) is { } entry
            ? Gone(entry, seconds)
            : null;

    /// <summary>Lets time pass: delays end, shelves empty, repeats fall due. Call at least once a second.</summary>
    /// <returns>What happened, in order; usually nothing, without allocation.</returns>
    public IReadOnlyList<AlertChange> Tick(double seconds)
    {
        List<AlertChange>? changes = null;
        if (_later.Count > 0)
        {
            changes = [.. _later];
            _later.Clear();
        }

        for (var index = 0; index < _entries.Count; index++)
        {
            if (Due(_entries[index], seconds) is { } change)
            {
                (changes ??= []).Add(change);
            }
        }

        while (_chatter?.Quiet(seconds) is { } cause)
        {
            if (Clear(AlertCauses.Chattering, seconds, ChatterSubject(cause)) is { } change)
            {
                (changes ??= []).Add(change);
            }
        }

        return changes ?? (IReadOnlyList<AlertChange>)[];
    }

    private AlertChange? Due(AlertEntry entry, double seconds)
    {
        if (entry.OnDueSeconds <= seconds)
        {
            entry.OnDueSeconds = double.NaN;
            return Raised(entry, seconds);
        }

        if (entry.OffDueSeconds <= seconds)
        {
            entry.OffDueSeconds = double.NaN;
            return Step(entry, AlertEvent.Return, AlertSteps.Returned, seconds);
        }

        if (entry.Alert.ShelvedUntilSeconds <= seconds)
        {
            return LeaveShelf(entry, seconds, null);
        }

        if (entry.RepeatDueSeconds <= seconds && entry.Alert.IsUnacknowledged)
        {
            entry.Alert = entry.Alert with { Repeats = entry.Alert.Repeats + 1 };
            entry.RepeatDueSeconds = seconds + _rules.RepeatSpacingSeconds(entry.Alert.Repeats);
            return new AlertChange(seconds, AlertSteps.Repeated, entry.Alert);
        }

        return null;
    }

    /// <summary>The alert that a new condition of this cause belongs to: one that went away lately, else a new one.</summary>
    private AlertEntry Find(string cause, double seconds)
    {
        var entry = _entries.Find(entry => entry.CanComeBack && entry.Alert.Cause == cause);
        if (entry is null)
        {
            entry = new AlertEntry(new Alert(bench, 0, cause, Severity.Notice, AlertState.Normal, seconds, ""));
            _entries.Add(entry);
        }

        return entry;
    }

    private AlertChange? Stands(AlertEntry entry, string cause, Severity severity, string text, double seconds, bool comes)
    {
        var before = entry.Alert;
        var worse = severity > before.Severity;
        entry.Alert = before with { Cause = cause, Text = text, Standing = true, Severity = worse ? severity : before.Severity };
        if (comes)
        {
            CountChatter(cause, seconds);
            var wasAway = double.IsNaN(entry.OffDueSeconds);
            entry.OffDueSeconds = double.NaN;
            if (before.Number == 0 && severity < Severity.Critical && _rules.OnDelaySeconds > 0)
            {
                entry.OnDueSeconds = seconds + _rules.OnDelaySeconds;
                return null;
            }

            if (wasAway)
            {
                entry.Alert = entry.Alert with { Severity = severity };
                return Raised(entry, seconds);
            }

            // Back before its off-delay was over: it was never away, and nobody is told again unless it is worse now.
            return worse ? Worse(entry, seconds) : null;
        }

        if (entry.IsPending)
        {
            if (severity < Severity.Critical)
            {
                return null;
            }

            entry.OnDueSeconds = double.NaN;
            return Raised(entry, seconds);
        }

        return worse ? Worse(entry, seconds)
            : cause != before.Cause ? new AlertChange(seconds, AlertSteps.Amended, entry.Alert)
            : null;
    }

    private AlertChange Raised(AlertEntry entry, double seconds)
    {
        if (entry.Alert.Number == 0)
        {
            entry.Alert = entry.Alert with { Number = ++_numbers };
        }

        entry.Alert = entry.Alert with { RaisedSeconds = seconds, Repeats = 0 };
        PlanRepeat(entry, seconds);
        return Step(entry, AlertEvent.Raise, AlertSteps.Raised, seconds)
            ?? new AlertChange(seconds, AlertSteps.Raised, entry.Alert);
    }

    /// <summary>What grew worse must be acknowledged again, and does not stay on the shelf.</summary>
    private AlertChange Worse(AlertEntry entry, double seconds)
    {
        entry.Alert = entry.Alert with { State = AlertState.Unacknowledged, ShelvedUntilSeconds = null, Repeats = 0 };
        PlanRepeat(entry, seconds);
        return new AlertChange(seconds, AlertSteps.Amended, entry.Alert);
    }

    private AlertChange? Gone(AlertEntry entry, double seconds)
    {
        if (!entry.Alert.Standing)
        {
            return null;
        }

        entry.Alert = entry.Alert with { Standing = false };
        if (entry.IsPending)
        {
            // It never stood long enough for anybody to hear of it.
            _entries.Remove(entry);
            return null;
        }

        if (_rules.OffDelaySeconds > 0)
        {
            entry.OffDueSeconds = seconds + _rules.OffDelaySeconds;
            return null;
        }

        return Step(entry, AlertEvent.Return, AlertSteps.Returned, seconds);
    }

    private void PlanRepeat(AlertEntry entry, double seconds) => entry.RepeatDueSeconds =
        entry.Alert.Severity == Severity.Critical && _rules.FirstRepeatSeconds > 0 ? seconds + _rules.RepeatSpacingSeconds(0) : double.NaN;

    private AlertChange? Step(AlertEntry entry, AlertEvent happened, string what, double seconds)
    {
        var state = AlertLife.Next(entry.Alert.State, happened, entry.Alert.Standing, _rules.Latching.Contains(entry.Alert.Cause));
        if (state == entry.Alert.State)
        {
            return null;
        }

        entry.Alert = entry.Alert with { State = state };
        return new AlertChange(seconds, what, entry.Alert);
    }

    private void CountChatter(string cause, double seconds)
    {
        if (cause == AlertCauses.Chattering)
        {
            return;
        }

        _chatter ??= new ChatterGuard(_rules.ChatterCount, _rules.ChatterQuietSeconds);
        if (_chatter.Raised(cause, seconds) &&
            Raise(AlertCauses.Chattering, Severity.Warning,
                $"{ChatterSubject(cause)} came and went {_rules.ChatterCount} or more times within a minute: a loose contact, or a limit set too close.", seconds) is { } change)
        {
            _later.Add(change);
        }
    }

    private static string ChatterSubject(string cause) => $"'{cause}'";

    /// <summary>Texts begin with the subject in quotes: two conditions of one cause are told apart by it.</summary>
    private static bool SameSubject(AlertEntry entry, string text)
    {
        var end = text.StartsWith('\'') ? text.IndexOf('\'', 1) : -1;
        return end < 0 || entry.Alert.Text.StartsWith(text[..(end + 1)], StringComparison.Ordinal);
    }
}
