using System.Runtime.CompilerServices;
using Lampwarden.Acquisition.Protocol;
using Lampwarden.Acquisition.Transport;
using Polly;
using Polly.Retry;

namespace Lampwarden.Acquisition;

/// <summary>
/// A meter for as long as it is wanted: opens it, asks or listens, and opens it again whenever it goes away.
/// Every poll, and every attempt to reopen, gives exactly one event. Not thread-safe but for <see cref="Health"/> and disposal.
/// </summary>
public sealed class MeterSession : IAsyncDisposable
{
    private static readonly TimeSpan LongestEnd = TimeSpan.FromSeconds(5);
    private readonly IMeterTransport _transport;
    private readonly MeterOptions _options;
    private readonly TimeProvider _time;
    private readonly long _origin;
    private readonly HealthBook _health = new();
    private readonly CancellationTokenSource _disposed = new();
    private Task _producer = Task.CompletedTask;
    private int _begun;

    /// <summary>Makes a session; opens nothing yet.</summary>
    /// <param name="options">The meter, valid.</param>
    /// <param name="time">Clock of polls and time stamps. Reply timeouts follow the real clock whatever this one does.</param>
    /// <param name="transport">The wire; null makes it from the options.</param>
    /// <param name="originStamp">Time stamp of <paramref name="time"/> from which events count their seconds; null: now. Give two meters of a bench the same.</param>
    public MeterSession(MeterOptions options, TimeProvider time, IMeterTransport? transport = null, long? originStamp = null)
    {
        _options = options;
        _time = time;
        _origin = originStamp ?? time.GetTimestamp();
        _transport = transport ?? (options.Transport.Kind == "tcp" ? new TcpTransport(options.Transport) : new SerialTransport(options.Transport));
    }

    /// <summary>How the meter is doing now. Safe to ask from any thread at any time.</summary>
    public MeterHealth Health => _health.Snapshot();

    /// <summary>
    /// Opens the meter and gives its events, for ever: trouble becomes gaps. Ends when the session is disposed.
    /// An event's consumer that is slow holds the meter's polls back, nothing is lost; it should take them within about a second.
    /// </summary>
    /// <exception cref="OperationCanceledException">The token said stop.</exception>
    /// <exception cref="InvalidOperationException">The session is or was being read already.</exception>
    public async IAsyncEnumerable<MeterEvent> ReadAsync([EnumeratorCancellation] CancellationToken cancellationToken = default)
    {
        if (Interlocked.Exchange(ref _begun, 1) != 0)
        {
            throw new InvalidOperationException($"The session of meter '{_options.Name}' gives its events once. Make another session.");
        }

        var outlet = new EventOutlet(new SessionClock(_time, _origin, _health), _health);
        using var stop = CancellationTokenSource.CreateLinkedTokenSource(cancellationToken, _disposed.Token);
        _producer = Task.Run(() => ProduceAsync(outlet, stop.Token), CancellationToken.None);
        try
        {
            while (await outlet.Reader.WaitToReadAsync(CancellationToken.None))
            {
                while (outlet.Reader.TryRead(out var one))
                {
                    yield return one;
                }
            }

            cancellationToken.ThrowIfCancellationRequested();
        }
        finally
        {
            await stop.CancelAsync();
            await _producer;
        }
    }

    /// <summary>Stops reading and closes the meter; comes back within seconds even when the driver does not.</summary>
    public async ValueTask DisposeAsync()
    {
        await _disposed.CancelAsync();
        try
        {
            await _producer.WaitAsync(LongestEnd);
            _disposed.Dispose();
        }
        catch (TimeoutException)
        {
            _health.Problem($"{_transport.Place} did not let itself be closed within {LongestEnd.TotalSeconds:0} s and was left behind");
        }
    }

    private async Task ProduceAsync(EventOutlet outlet, CancellationToken stop)
    {
        Exception? fault = null;
        try
        {
            var reopening = Reopening(outlet);
            while (true)
            {
                await reopening.ExecuteAsync(async token => await OpenAndRunAsync(outlet, token), stop);
                // The wire was good and is gone: a breath before the first attempt, so that a flapping one cannot make us spin.
                await Task.Delay(TimeSpan.FromMilliseconds(100), _time, stop);
            }
        }
        catch (OperationCanceledException) when (stop.IsCancellationRequested)
        {
            // Told to stop.
        }
        catch (Exception unexpected)
        {
            fault = unexpected; // A fault of ours reaches the reader: nothing is swallowed here.
        }

        outlet.Complete(fault);
    }

    /// <summary>Returns when a wire that gave readings is gone; throws when it gave none, which makes the next attempt wait longer.</summary>
    private async Task OpenAndRunAsync(EventOutlet outlet, CancellationToken stop)
    {
        var readingsBefore = _health.Readings;
        await using var connection = await _transport.OpenAsync(stop);
        if (_transport is SerialTransport { Shortcoming: { } shortcoming })
        {
            _health.Problem(shortcoming);
        }

        _health.Opened();
        try
        {
            var protocol = new ScpiMeter(_options, outlet);
            await protocol.RunAsync(new Wire(connection, _transport.Place, _time), stop);
        }
        catch (TransportException gone) when (_health.Readings > readingsBefore)
        {
            outlet.Gap(gone.Reason, gone.Message);
            await outlet.FlushAsync(stop);
        }
        finally
        {
            _health.Closed();
        }
    }

    private ResiliencePipeline Reopening(EventOutlet outlet) => new ResiliencePipelineBuilder { TimeProvider = _time }
        .AddRetry(new RetryStrategyOptions
        {
            ShouldHandle = new PredicateBuilder().Handle<TransportException>(),
            MaxRetryAttempts = int.MaxValue,
            BackoffType = DelayBackoffType.Exponential,
            UseJitter = true,
            Delay = TimeSpan.FromMilliseconds(250),
            MaxDelay = TimeSpan.FromSeconds(5),
            OnRetry = async attempt =>
            {
                var trouble = (TransportException)attempt.Outcome.Exception!;
                _health.Problem(trouble.Message);
                outlet.Gap(trouble.Reason, trouble.Message);
                await outlet.FlushAsync(attempt.Context.CancellationToken);
            },
        })
        .Build();
}
