using System.Text;
using Lampwarden.Host.Configuration;
using MQTTnet;
using MQTTnet.Formatter;
using MQTTnet.Protocol;

namespace Lampwarden.Host.Alerting.Routes;

/// <summary>
/// A connection to a broker that is kept up for as long as it lives: the library does not reconnect by itself. Its last
/// will makes the broker say <c>offline</c> when this program dies without a word. Thread-safe.
/// </summary>
public sealed class MqttLink : IAsyncDisposable
{
    private static readonly TimeSpan LongestPause = TimeSpan.FromSeconds(30);

    private readonly MqttOptions _options;
    private readonly MqttClientOptions _connection;
    private readonly TimeProvider _time;
    private readonly Func<MqttLink, CancellationToken, Task> _connected;
    private readonly IMqttClient _client = new MqttClientFactory().CreateMqttClient();
    private readonly CancellationTokenSource _stop = new();
    private readonly SemaphoreSlim _lost = new(0, 1);
    private readonly Task _loop;
    private string _trouble = "not connected yet";

    /// <summary>Starts connecting.</summary>
    /// <param name="options">Which broker.</param>
    /// <param name="password">Null where no user is named.</param>
    /// <param name="clientId">Unique at the broker; the same after a restart, so that a dead session is taken over.</param>
    /// <param name="topic">First part of every topic.</param>
    /// <param name="time">Clock of the pauses between attempts.</param>
    /// <param name="connected">Called after each connection, to publish again what must stand.</param>
    public MqttLink(MqttOptions options, Secret? password, string clientId, string topic, TimeProvider time, Func<MqttLink, CancellationToken, Task> connected)
    {
        (_options, _time, _connected, Topic) = (options, time, connected, topic);
        var builder = new MqttClientOptionsBuilder()
            .WithTcpServer(options.Host, options.Port)
            // 3.1.1 is spoken by every broker in a shop, old ones too.
            .WithProtocolVersion(MqttProtocolVersion.V311)
            .WithClientId(clientId)
            .WithCleanSession()
            .WithKeepAlivePeriod(TimeSpan.FromSeconds(options.KeepAliveSeconds))
            .WithTimeout(TimeSpan.FromSeconds(10))
            .WithWillTopic(StatusTopic)
            .WithWillPayload("offline")
            .WithWillRetain()
            .WithWillQualityOfServiceLevel(MqttQualityOfServiceLevel.AtLeastOnce);
        if (options.User is not null)
        {
            builder.WithCredentials(options.User, password?.Value);
        }

        if (options.Tls)
        {
            builder.WithTlsOptions(tls => tls.UseTls().WithCertificateValidationHandler(seen => CertificatePin.Accept(options.CertificateSha256, seen.Certificate, seen.SslPolicyErrors)));
        }

        _connection = builder.Build();
        _client.DisconnectedAsync += lost =>
        {
            if (lost.ClientWasConnected)
            {
                _trouble = lost.Exception?.Message ?? lost.ReasonString ?? "the connection was lost";
                if (_lost.CurrentCount == 0)
                {
                    _lost.Release();
                }
            }

            return Task.CompletedTask;
        };
        _loop = Task.Run(() => KeepConnectedAsync(_stop.Token));
    }

    /// <summary>First part of every topic.</summary>
    public string Topic { get; }

    /// <summary>Says online, offline (the will) or stopped; retained.</summary>
    public string StatusTopic => Topic + "/status";

    /// <summary>Whether the broker is connected now.</summary>
    public bool IsConnected => _client.IsConnected;

    /// <summary>Waits for a connection, at most so long.</summary>
    public async Task WaitForConnectionAsync(TimeSpan longest, CancellationToken cancellation)
    {
        var start = _time.GetTimestamp();
        while (!_client.IsConnected && _time.GetElapsedTime(start) < longest)
        {
            await Task.Delay(TimeSpan.FromMilliseconds(50), _time, cancellation);
        }
    }

    /// <summary>Publishes and waits for the broker's receipt.</summary>
    /// <exception cref="RouteException">Not connected, or no receipt.</exception>
    public async Task PublishAsync(string topic, string payload, bool retain, CancellationToken cancellation)
    {
        if (!_client.IsConnected)
        {
            throw new RouteException($"the broker at {Server} is not connected: {_trouble}");
        }

        var message = new MqttApplicationMessageBuilder()
            .WithTopic(topic)
            .WithPayload(Encoding.UTF8.GetBytes(payload))
            .WithRetainFlag(retain)
            .WithQualityOfServiceLevel(MqttQualityOfServiceLevel.AtLeastOnce)
            .Build();
        try
        {
            var result = await _client.PublishAsync(message, cancellation);
            if (!result.IsSuccess)
            {
                throw new RouteException($"the broker at {Server} did not take a message: {result.ReasonCode} {result.ReasonString}");
            }
        }
        catch (Exception error) when (error is not OperationCanceledException and not RouteException)
        {
            throw new RouteException($"the broker at {Server}: {error.Message}", error);
        }
    }

    /// <summary>Says <c>stopped</c>, so that nobody takes an orderly end for a death, and disconnects.</summary>
    public async ValueTask DisposeAsync()
    {
        await _stop.CancelAsync();
        await _loop;
        using var deadline = new CancellationTokenSource(TimeSpan.FromSeconds(3));
        try
        {
            if (_client.IsConnected)
            {
                await PublishAsync(StatusTopic, "stopped", retain: true, deadline.Token).WaitAsync(deadline.Token);
                await _client.DisconnectAsync(new MqttClientDisconnectOptions(), deadline.Token).WaitAsync(deadline.Token);
            }
        }
        catch (Exception error) when (error is RouteException or OperationCanceledException or MQTTnet.Exceptions.MqttCommunicationException)
        {
            // The broker went first; its will of ours then says offline, which is the safe side.
        }

        _client.Dispose();
        _lost.Dispose();
        _stop.Dispose();
    }

    private string Server => FormattableString.Invariant($"{_options.Host}:{_options.Port}");

    private async Task KeepConnectedAsync(CancellationToken stop)
    {
        var pause = TimeSpan.FromSeconds(1);
        while (!stop.IsCancellationRequested)
        {
            try
            {
                await _client.ConnectAsync(_connection, stop);
                await PublishAsync(StatusTopic, "online", retain: true, stop);
                await _connected(this, stop);
                pause = TimeSpan.FromSeconds(1);
                await _lost.WaitAsync(stop);
            }
            catch (OperationCanceledException) when (stop.IsCancellationRequested)
            {
                return;
            }
            catch (Exception error) when (error is not OutOfMemoryException)
            {
                _trouble = error.InnerException?.Message ?? error.Message;
            }

            try
            {
                // Spread out, so that forty hosts do not all come back to a restarted broker at once.
                await Task.Delay(pause * (0.5 + (Random.Shared.NextDouble() * 0.5)), _time, stop);
            }
            catch (OperationCanceledException)
            {
                return;
            }

            pause = pause * 2 < LongestPause ? pause * 2 : LongestPause;
        }
    }
}
