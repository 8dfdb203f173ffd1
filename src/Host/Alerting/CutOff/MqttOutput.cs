using Lampwarden.Host.Alerting.Routes;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Alerting.CutOff;

/// <summary>A contactor that listens to a topic. The broker's receipt says that it has the message, not that the contactor has.</summary>
public sealed class MqttOutput : ICutOffOutput
{
    private readonly MqttLink _link;
    private readonly string _topic;

    /// <summary>Starts connecting; <c>TOPIC/watcher/status</c> carries this connection's last will.</summary>
    public MqttOutput(CutOffOutputOptions options, string instance, TimeProvider time)
    {
        _topic = options.Topic;
        Place = $"{options.Host}:{options.Port} {options.Topic}";
        var broker = new MqttOptions { Host = options.Host, Port = int.Parse(options.Port, System.Globalization.CultureInfo.InvariantCulture) };
        _link = new MqttLink(broker, null, $"lampwarden-{instance}-cut-off-{options.Bench}", options.Topic + "/watcher", time, (_, _) => Task.CompletedTask);
    }

    /// <inheritdoc/>
    public string Place { get; }

    /// <inheritdoc/>
    public async Task SendAsync(string text, string? answer, CancellationToken cancellation)
    {
        try
        {
            await _link.PublishAsync(_topic, text, retain: false, cancellation);
        }
        catch (RouteException error)
        {
            throw new IOException(error.Message, error);
        }
    }

    /// <inheritdoc/>
    public ValueTask DisposeAsync() => _link.DisposeAsync();
}
