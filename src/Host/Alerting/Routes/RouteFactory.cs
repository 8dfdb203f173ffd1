using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting.Life;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Alerting.Routes;

/// <summary>Makes rules and routes from the configuration.</summary>
public static class RouteFactory
{
    /// <summary>What this host calls itself.</summary>
    public static string Instance(AlertsOptions options) => options.Instance ?? Environment.MachineName;

    /// <summary>How alerts live.</summary>
    public static AlertRules Rules(AlertsOptions options) => new()
    {
        OnDelaySeconds = options.OnDelaySeconds,
        OffDelaySeconds = options.OffDelaySeconds,
        Latching = options.Latch.Count == 0 ? AlertRules.DefaultLatching : options.Latch.ToHashSet(StringComparer.Ordinal),
        FirstRepeatSeconds = options.RepeatMinutes * 60,
        RepeatGrowth = options.RepeatGrowth,
        LongestRepeatSeconds = options.RepeatLongestMinutes * 60,
        LongestShelfSeconds = options.ShelveAtMostHours * 3600,
        ChatterCount = options.ChatterPerMinute,
    };

    /// <summary>Makes the routes and starts them. The log route is not among them: it is always there.</summary>
    /// <param name="options">As checked.</param>
    /// <param name="time">Clock of pauses and deadlines.</param>
    /// <param name="logger">For the routes' own events.</param>
    /// <param name="turned">Called when one goes down or works again.</param>
    /// <exception cref="ConfigurationException">A secret is named but not there; nothing was started.</exception>
    public static IReadOnlyList<RouteRunner> Make(
        AlertsOptions options, TimeProvider time, ILogger logger, Action<RouteRunner, IReadOnlyList<AlertChange>>? turned = null)
    {
        // Secrets first: a fault among them must not leave half of the routes running.
        var routes = options.Routes.Where(route => route.Kind != "log")
            .Select((route, index) => (Options: route, Secret: ReadSecret(route, $"alerts.routes[{index}]"))).ToList();
        return [.. routes.Select(route => new RouteRunner(
            Make(route.Options, route.Secret, Instance(options), time), Settings(route.Options), time, logger, turned))];
    }

    private static IAlertRoute Make(AlertRouteOptions route, Secret? secret, string instance, TimeProvider time)
    {
        var name = route.Name ?? route.Kind;
        return route.Kind switch
        {
            "webhook" => new WebhookRoute(name, new Uri(route.Webhook!.Url), secret, instance, time),
            "mail" => new MailRoute(name, route.Mail!, secret, instance),
            "mqtt" => new MqttRoute(name, route.Mqtt!, secret, instance, time),
            "command" => new CommandRoute(name, route.Command!, instance),
            _ => throw new InvalidOperationException($"No route of kind {route.Kind}."),
        };
    }

    private static Secret? ReadSecret(AlertRouteOptions route, string key) => route.Kind switch
    {
        "webhook" => Secret.Read(route.Webhook!.SecretFile, route.Webhook.SecretVariable, $"{key}.webhook.secretFile"),
        "mail" => Secret.Read(route.Mail!.PasswordFile, route.Mail.PasswordVariable, $"{key}.mail.passwordFile"),
        "mqtt" => Secret.Read(route.Mqtt!.PasswordFile, route.Mqtt.PasswordVariable, $"{key}.mqtt.passwordFile"),
        _ => null,
    };

    private static RouteSettings Settings(AlertRouteOptions route) => new()
    {
        Kind = route.Kind,
        Minimum = route.MinimumSeverity == "critical" ? Severity.Critical : Severity.Warning,
        AfterRepeats = route.AfterRepeats,
        Attempt = TimeSpan.FromSeconds(route.AttemptSeconds),
        GiveUp = TimeSpan.FromMinutes(route.GiveUpMinutes),
        DownAfter = TimeSpan.FromSeconds(route.DownAfterSeconds),
        AtMostPerMinute = route.Kind == "mqtt" ? int.MaxValue : route.AtMostPerMinute,
        Groups = route.Kind != "mqtt",
    };
}
