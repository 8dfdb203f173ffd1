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
        var news = change.What is AlertSteps.Raised or AlertSteps.Amended or AlertSteps.Repeated;
        var level = !news ? LogLevel.Information : alert.Severity == Severity.Critical ? LogLevel.Error : LogLevel.Warning;
        Log.AlertTold(logger, level, alert.Bench, change.What, alert.Cause, alert.Severity.Text(), alert.Text);
        return Task.CompletedTask;
    }
}
