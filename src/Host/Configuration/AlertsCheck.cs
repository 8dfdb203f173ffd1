using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Configuration;

/// <summary>Rules of the alerts that no single key shows.</summary>
internal static class AlertsCheck
{
    private static readonly string[] Signatures = [.. Enum.GetValues<Signature>().Select(WatchingNames.Text)];

    /// <summary>Adds every fault found.</summary>
    public static void Run(LampwardenOptions options, List<Fault> faults)
    {
        var alerts = options.Alerts;
        for (var index = 0; index < alerts.Latch.Count; index++)
        {
            if (!Signatures.Contains(alerts.Latch[index]))
            {
                faults.Add(new Fault($"alerts.latch[{index}]", alerts.Latch[index], $"must be one of {string.Join(", ", Signatures)}"));
            }
        }

        var names = new HashSet<string>(StringComparer.OrdinalIgnoreCase);
        for (var index = 0; index < alerts.Routes.Count; index++)
        {
            Route(alerts.Routes[index], $"alerts.routes[{index}]", names, faults);
        }

        if (alerts.Routes.Count > 0 && alerts.Routes.All(route => route.AfterRepeats > 0) && alerts.Routes.Any(route => route.Kind != "log"))
        {
            faults.Add(new Fault("alerts.routes", null, "every route waits for repeats; give at least one of them afterRepeats 0, or nobody hears of an alert when it is raised"));
        }

        if (alerts.CutOff is { } cutOff)
        {
            CutOff(cutOff, options, faults);
        }
    }

    private static void Route(AlertRouteOptions route, string key, HashSet<string> names, List<Fault> faults)
    {
        object? own = route.Kind switch { "webhook" => route.Webhook, "mail" => route.Mail, "mqtt" => route.Mqtt, "command" => route.Command, _ => route };
        if (own is null)
        {
            faults.Add(new Fault($"{key}.{route.Kind}", null, $"must be given: a route of kind {route.Kind} says there where to"));
        }

        if (route.Kind != "log" && !names.Add(route.Name ?? route.Kind))
        {
            faults.Add(new Fault($"{key}.name", route.Name ?? route.Kind, "must be unique among the routes"));
        }

        if (route.Mail is { } mail)
        {
            if (mail.To.Count == 0)
            {
                faults.Add(new Fault($"{key}.mail.to", null, "must name at least one address"));
            }

            foreach (var address in mail.To.Append(mail.From).Where(address => address.Length > 0 && !MimeKit.MailboxAddress.TryParse(address, out _)))
            {
                faults.Add(new Fault($"{key}.mail", address, "must be a mail address such as bench@example.org"));
            }

            if (mail.User is not null && mail.PasswordFile is null && mail.PasswordVariable is null)
            {
                faults.Add(new Fault($"{key}.mail.passwordFile", null, "must be given (or passwordVariable) where user is"));
            }

            if (mail.User is not null && mail.Tls == "none" && !IsLoopback(mail.Host))
            {
                faults.Add(new Fault($"{key}.mail.tls", mail.Tls, "must be startTls or tls: a password is not sent in the clear"));
            }
        }

        if (route.Webhook is { } webhook && webhook.Url.Length > 0 &&
            !(Uri.TryCreate(webhook.Url, UriKind.Absolute, out var url) && (url.Scheme == Uri.UriSchemeHttps || url.Scheme == Uri.UriSchemeHttp)))
        {
            faults.Add(new Fault($"{key}.webhook.url", webhook.Url, "must begin with http:// or https://"));
        }
    }

    private static void CutOff(CutOffOptions cutOff, LampwardenOptions options, List<Fault> faults)
    {
        for (var index = 0; index < cutOff.Trips.Count; index++)
        {
            if (!Signatures.Contains(cutOff.Trips[index]))
            {
                faults.Add(new Fault($"alerts.cutOff.trips[{index}]", cutOff.Trips[index], $"must be one of {string.Join(", ", Signatures)}"));
            }
        }

        if (cutOff.Trips.Count == 0 && cutOff.Outputs.Count > 0)
        {
            faults.Add(new Fault("alerts.cutOff.trips", null, "must name the signatures that may trip it, such as hard-short"));
        }

        for (var index = 0; index < cutOff.Outputs.Count; index++)
        {
            var (output, key) = (cutOff.Outputs[index], $"alerts.cutOff.outputs[{index}]");
            if (!options.Benches.Any(bench => bench.Name == output.Bench))
            {
                faults.Add(new Fault($"{key}.bench", output.Bench, "must be the name of a bench"));
            }

            if (cutOff.Outputs.Take(index).Any(other => other.Bench == output.Bench))
            {
                faults.Add(new Fault($"{key}.bench", output.Bench, "has an output already"));
            }

            if (output.Kind != "serial" && !(int.TryParse(output.Port, out var port) && port is > 0 and < 65536))
            {
                faults.Add(new Fault($"{key}.port", output.Port, "must be a number between 1 and 65535"));
            }

            if (output.Kind == "mqtt" && output.Topic.Length == 0)
            {
                faults.Add(new Fault($"{key}.topic", null, "must be given for mqtt"));
            }

            if (output.OpenText.Length == 0 && output.KeepAliveText is null)
            {
                faults.Add(new Fault($"{key}.openText", null, "must be given where there is no keepAliveText"));
            }

            if (output.KeepAliveText is not null && output.LapseSeconds < 2 * output.KeepAliveSeconds)
            {
                faults.Add(new Fault($"{key}.lapseSeconds", FormattableString.Invariant($"{output.LapseSeconds}"), "must be at least twice keepAliveSeconds, or one late keep-alive opens the contactor"));
            }
        }
    }

    internal static bool IsLoopback(string host) =>
        host.Equals("localhost", StringComparison.OrdinalIgnoreCase) || (System.Net.IPAddress.TryParse(host, out var address) && System.Net.IPAddress.IsLoopback(address));
}
