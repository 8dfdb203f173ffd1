using Lampwarden.Acquisition.Protocol;
using Lampwarden.Acquisition.Transport;
using Polly;
using Polly.Retry;

namespace Lampwarden.Acquisition;

/// <summary>
/// One wire and the stations that want something from it, kept open as long as there is one. Opening again after trouble backs off
/// with jitter up to five seconds; every attempt gives each station one gap with its reason.
/// </summary>
internal sealed class MeterLine : IAsyncDisposable
{
    private static readonly TimeSpan FirstPause = TimeSpan.FromMilliseconds(250);
    private static readonly TimeSpan LongestPause = TimeSpan.FromSeconds(5);
    // A wire that was good is opened again at once, but for a breath, so that a flapping one cannot make us spin.
    private static readonly TimeSpan Breath = TimeSpan.FromMilliseconds(100);
    private readonly IMeterTransport _transport;
    private readonly TimeProvider _time;
    private readonly CancellationTokenSource _over = new();
    private volatile Station[] _stations = [];
    private volatile bool _open;
    private Task _running = Task.CompletedTask;

    public MeterLine(IMeterTransport transport, TimeProvider time)
    {
        _transport = transport;
        _time = time;
    }

    /// <summary>Who wants something at this moment; a snapshot that never changes.</summary>
    public Station[] Stations => _stations;

    /// <summary>Adds a station; the first one opens the wire. The caller sees to it that this and <see cref="Remove"/> never overlap.</summary>
    public void Add(Station station)
    {
        var first = _stations.Length == 0;
        _stations = [.. _stations, station];
        if (_open)
        {
            station.Health.Opened();
        }
        if (first)
        {
            _running = Task.Run(RunAsync);
        }
    }

    /// <summary>Takes a station off.</summary>
    /// <returns>True when it was the last: the line must then be closed.</returns>
    public bool Remove(Station station)
    {
        _stations = [.. _stations.Where(one => one != station)];
        return _stations.Length == 0;
    }

    /// <summary>Closes the wire and waits until it is closed.</summary>
    public async ValueTask DisposeAsync()
    {
        await _over.CancelAsync();
        await _running;
        _over.Dispose();
    }

    private async Task RunAsync()
    {
        Exception? fault = null;
        try
        {
            var reopening = Reopening();
            while (true)
            {
                await reopening.ExecuteAsync(async token => await OpenAndRunAsync(token), _over.Token);
                await Task.Delay(Breath, _time, _over.Token);
            }
        }
        catch (OperationCanceledException) when (_over.IsCancellationRequested)
        {
            // Told to stop.
        }
        catch (Exception unexpected)
        {
            fault = unexpected; // A fault of ours reaches every reader: nothing is swallowed here.
        }

        foreach (var station in _stations)
        {
            station.Outlet.Complete(fault);
        }
    }

    /// <summary>Returns when a wire that gave readings is gone; throws when it gave none, which makes the next attempt wait longer.</summary>
    private async Task OpenAndRunAsync(CancellationToken stop)
    {
        var before = Readings();
        await using var connection = await _transport.OpenAsync(stop);
        _open = true;
        foreach (var station in _stations)
        {
            station.Health.Opened();
            if (_transport is SerialTransport { Shortcoming: { } shortcoming })
            {
                station.Health.Problem(shortcoming);
            }
        }

        try
        {
            // Every station of a wire speaks its language: the first one's.
            IMeterProtocol protocol = _stations is [{ Options.Protocol.Kind: "lines" }, ..]
                ? new LineMeter(this)
                : new ScpiMeter(this, _time);
            await protocol.RunAsync(new Wire(connection, _transport.Place, _time, _stations is [var first, ..] ? first.Options.Protocol.LineEnd : ""), stop);
        }
        catch (TransportException gone) when (Readings() > before)
        {
            await TellAsync(gone, stop);
        }
        finally
        {
            _open = false;
            foreach (var station in _stations)
            {
                station.Health.Closed();
            }
        }
    }

    private long Readings() => _stations.Sum(station => station.Health.Readings);

    private async ValueTask TellAsync(TransportException trouble, CancellationToken stop)
    {
        foreach (var station in _stations)
        {
            station.Health.Problem(trouble.Message);
            station.Outlet.Gap(trouble.Reason, trouble.Message);
            await station.Outlet.FlushAsync(stop);
        }
    }

    private ResiliencePipeline Reopening() => new ResiliencePipelineBuilder { TimeProvider = _time }
        .AddRetry(new RetryStrategyOptions
        {
            ShouldHandle = new PredicateBuilder().Handle<TransportException>(),
            MaxRetryAttempts = int.MaxValue,
            BackoffType = DelayBackoffType.Exponential,
            UseJitter = true,
            Delay = FirstPause,
            MaxDelay = LongestPause,
            OnRetry = attempt => TellAsync((TransportException)attempt.Outcome.Exception!, attempt.Context.CancellationToken),
        })
        .Build();
}
