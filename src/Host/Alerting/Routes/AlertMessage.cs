using System.Globalization;
using System.Text;
using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Alerting.Routes;

/// <summary>A change as people and machines get it. Property names are contract: docs/alerts.md lists them.</summary>
/// <param name="Delivery">The same for every attempt to tell the same change by the same route.</param>
/// <param name="Instance">Which host tells.</param>
/// <param name="Alert">Number of the alert within its run; 0 for a group or a test.</param>
/// <param name="Seconds">Seconds of the run at the step.</param>
/// <param name="RaisedSeconds">Seconds of the run when it was raised.</param>
/// <param name="Changes">For a group: the changes in it.</param>
public sealed record AlertMessage(
    string Delivery,
    string Instance,
    string Bench,
    string What,
    int Alert,
    string Cause,
    Severity Severity,
    AlertState State,
    string Text,
    double Seconds,
    double RaisedSeconds,
    DateTimeOffset Utc,
    string? By,
    string? Reason,
    int Repeats,
    IReadOnlyList<AlertMessage>? Changes)
{
    /// <summary>The message of a change.</summary>
    public static AlertMessage Of(AlertChange change, string instance) => new(
        string.Create(CultureInfo.InvariantCulture, $"{instance}-{change.Utc.UtcTicks:x}-{change.Alert.Bench}-{change.Alert.Number}-{change.What}").Replace(' ', '_'),
        instance,
        change.Alert.Bench,
        change.What,
        change.Alert.Number,
        change.Alert.Cause,
        change.Alert.Severity,
        change.Alert.State,
        change.Alert.Text,
        change.Seconds,
        change.Alert.RaisedSeconds,
        change.Utc,
        change.By,
        change.Reason,
        change.Alert.Repeats,
        change.Group is null ? null : [.. change.Group.Select(one => Of(one, instance))]);

    /// <summary>One line that fits a phone's lock screen.</summary>
    public string Subject() => What switch
    {
        AlertSteps.Test => $"[test] {Instance}: this route works",
        AlertSteps.Grouped => $"[{Severity.Text()}] {Instance}: {Changes!.Count} alert changes",
        AlertSteps.Repeated => $"[{Severity.Text()}] {Bench}: {Cause} still not acknowledged",
        _ => $"[{Severity.Text()}] {Bench}: {Cause} {What}",
    };

    /// <summary>The whole message in plain text.</summary>
    public string Body()
    {
        var text = new StringBuilder();
        if (Changes is null)
        {
            text.AppendLine(Text);
            text.AppendLine();
            Line(text, this);
        }
        else
        {
            text.AppendLine(Text);
            text.AppendLine();
            foreach (var change in Changes)
            {
                Line(text, change);
                text.AppendLine("    " + change.Text);
            }
        }

        text.AppendLine();
        text.AppendLine($"Told by {Instance}. The lamps limit, they do not isolate: treat every part behind them as live.");
        return text.ToString();
    }

    private static void Line(StringBuilder text, AlertMessage change)
    {
        text.Append(CultureInfo.InvariantCulture, $"{change.Utc:yyyy-MM-dd HH:mm:ss} UTC  {change.Bench}  alert {change.Alert}  {change.Cause}  {change.Severity.Text()}  {change.What}");
        if (change.By is not null)
        {
            text.Append(" by ").Append(change.By);
        }

        if (change.Reason is not null)
        {
            text.Append(": ").Append(change.Reason);
        }

        text.AppendLine();
    }
}
