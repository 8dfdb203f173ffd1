using System.CommandLine;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Routes;
using Lampwarden.Host.Configuration;
using Microsoft.Extensions.Logging.Abstractions;

namespace Lampwarden.Host.Commands;

/// <summary><c>alerts test</c>: sends a message marked as a test by every route, and says which of them work.</summary>
internal sealed class AlertsTestCommand : CliCommand
{
    private readonly Option<string> _config = CommonOptions.Config();
    private readonly Option<string?> _route = new("--route") { Description = "Only the route of this name", HelpName = "NAME" };

    public AlertsTestCommand()
        : base("test", "Send a test message by every route of the configuration and say which of them work")
    {
        Add(_config);
        Add(_route);
    }

    /// <summary>The parent command.</summary>
    public static Command Group() => new("alerts", "The ways in which people are told") { new AlertsTestCommand() };

    protected override async Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var options = ConfigurationFile.Load(parsed.GetValue(_config)!).Alerts;
        await using var dispatch = new AlertDispatch(RouteFactory.Rules(options), null, TimeProvider.System, NullLogger.Instance);
        dispatch.Use(turned => RouteFactory.Make(options, TimeProvider.System, NullLogger.Instance, turned));
        var wanted = parsed.GetValue(_route);
        var names = dispatch.Health.Select(route => route.Name).ToList();
        if (wanted is not null && !names.Contains(wanted))
        {
            throw new BadInputException($"--route '{wanted}' is no route of the configuration; {(names.Count == 0 ? "it has none" : "expected one of " + string.Join(", ", names))}.");
        }

        if (names.Count == 0)
        {
            terminal.Prose.WriteLine("The configuration names no routes: alerts go to the log and the page only.");
        }

        await dispatch.WaitForConnectionsAsync(TimeSpan.FromSeconds(5), cancellation);
        var trials = await dispatch.TryAsync(wanted, cancellation);
        foreach (var trial in trials)
        {
            terminal.Prose.WriteLine(FormattableString.Invariant($"{trial.Route} ({trial.Kind}): {(trial.Ok ? "taken" : "NOT TAKEN: " + trial.Error)}, {trial.Seconds:F1} s"));
        }

        if (terminal.WantsJson)
        {
            terminal.WriteJson(new { routes = trials });
        }

        return trials.All(trial => trial.Ok) ? ExitCode.Done : ExitCode.No;
    }
}
