using System.Text.Json;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Alerting.Routes;

/// <summary>
/// Publishes each change under <c>changes</c>, and keeps the state of every bench under <c>bench/NAME</c> as a retained
/// message, so that whoever subscribes later sees at once how things stand.
/// </summary>
public sealed class MqttRoute : IAlertRoute, IAsyncDisposable
{
    private readonly string _instance;
    private readonly MqttLink _link;
    private readonly Lock _gate = new();
    private readonly Dictionary<string, SortedDictionary<int, Alert>> _open = [];

    /// <summary>Starts connecting at once: the last will must be in place before anything happens.</summary>
    public MqttRoute(string name, MqttOptions options, Secret? password, string instance, TimeProvider time)
    {
        (Name, _instance) = (name, instance);
        _link = new MqttLink(options, password, $"lampwarden-{instance}-{name}", options.Topic ?? $"lampwarden/{instance}", time, RestateAsync);
    }

    /// <inheritdoc/>
    public string Name { get; }

    /// <summary>Waits for the broker, at most so long; gives up silently, because telling then says why.</summary>
    public Task WaitForConnectionAsync(TimeSpan longest, CancellationToken cancellation) => _link.WaitForConnectionAsync(longest, cancellation);

    /// <inheritdoc/>
    /// <exception cref="RouteException">The broker did not confirm it.</exception>
    public async Task TellAsync(AlertChange change, CancellationToken cancellation)
    {
        var benches = new HashSet<string>();
        foreach (var one in change.Group ?? [change])
        {
            if (Note(one.Alert))
            {
                benches.Add(one.Alert.Bench);
            }
        }

        // State first: whoever acts on the change finds the state already true.
        foreach (var bench in benches)
        {
            await StateAsync(bench, cancellation);
        }

        foreach (var one in change.Group ?? [change])
        {
            await _link.PublishAsync(_link.Topic + "/changes", JsonSerializer.Serialize(AlertMessage.Of(one, _instance), Json.Compact), retain: false, cancellation);
        }
    }

    /// <inheritdoc/>
    public ValueTask DisposeAsync() => _link.DisposeAsync();

    private bool Note(Alert alert)
    {
        if (alert.Cause == AlertCauses.Test)
        {
            return false;
        }

        lock (_gate)
        {
            if (!_open.TryGetValue(alert.Bench, out var open))
            {
                _open[alert.Bench] = open = [];
            }

            if (alert.IsOpen)
            {
                open[alert.Number] = alert;
            }
            else
            {
                open.Remove(alert.Number);
            }

            return true;
        }
    }

    private async Task StateAsync(string bench, CancellationToken cancellation)
    {
        BenchState state;
        lock (_gate)
        {
            Alert[] open = [.. _open[bench].Values];
            var loud = open.Where(alert => alert.State != AlertState.Shelved).ToList();
            state = new BenchState(
                bench,
                loud.Count == 0 ? "quiet" : loud.Max(alert => alert.Severity).Text(),
                open.Count(alert => alert.IsUnacknowledged),
                [.. open.Select(alert => new OpenAlert(alert.Number, alert.Cause, alert.Severity, alert.State, alert.Text))]);
        }

        await _link.PublishAsync($"{_link.Topic}/bench/{TopicPart(bench)}", JsonSerializer.Serialize(state, Json.Compact), retain: true, cancellation);
    }

    /// <summary>After a reconnection the broker may have lost what it retained, or hold what was true before.</summary>
    private async Task RestateAsync(MqttLink link, CancellationToken cancellation)
    {
        string[] benches;
        lock (_gate)
        {
            benches = [.. _open.Keys];
        }

        foreach (var bench in benches)
        {
            await StateAsync(bench, cancellation);
        }
    }

    /// <summary>Names of benches may hold what a topic may not (MQTT 3.1.1, 4.7).</summary>
    private static string TopicPart(string name) => name.Replace('/', '-').Replace('+', '-').Replace('#', '-');

    private sealed record BenchState(string Bench, string Worst, int Unacknowledged, IReadOnlyList<OpenAlert> Alerts);

    private sealed record OpenAlert(int Alert, string Cause, Severity Severity, AlertState State, string Text);
}
