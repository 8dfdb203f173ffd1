using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Alerting;

/// <summary>The route that is always there: one log line a change, at a level that follows the severity.</summary>
public sealed class LogRoute(ILogger logger) : IAlertRoute
{
    /// <inheritdoc/>
    public string Name => "log";

    /// <inheritdoc/>
    public Task TellAsync(AlertChange change, CancellationToken cancellation)
    {
        var alert = change.Alert;
        var level = alert.Severity == Severity.Critical && change.What is "raised" or "amended" ? LogLevel.Error : LogLevel.Warning;
        Log.AlertTold(logger, level, alert.Bench, change.What, alert.Signature.Text(), alert.Severity.Text(), alert.Text);
        return Task.CompletedTask;
    }
}
