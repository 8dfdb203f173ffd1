using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Unattended;

/// <summary>
/// Beats only while every bench's loop handles readings: feeds systemd's watchdog and pings an address of the user's. When a
/// loop is stuck it says so by every route and, after a grace in which they can tell it, ends the process, so that the
/// service manager starts it anew and the runs are taken up again.
/// </summary>
public sealed class Heart : IAsyncDisposable
{
    private static readonly TimeSpan Slowest = TimeSpan.FromSeconds(5);
    private static readonly TimeSpan PingDeadline = TimeSpan.FromSeconds(10);

    /// <summary>Between saying that a loop is stuck and ending: time for the routes to tell it.</summary>
    public static readonly TimeSpan Grace = TimeSpan.FromSeconds(10);

    private readonly UnattendedOptions _options;
    private readonly Pulse _pulse;
    private readonly AlertDispatch _dispatch;
    private readonly ServiceManager _manager;
    private readonly TimeProvider _time;
    private readonly ILogger _logger;
    private readonly Action<string> _end;
    private readonly HttpClient _client = new(new SocketsHttpHandler { AllowAutoRedirect = false, UseCookies = false }) { Timeout = Timeout.InfiniteTimeSpan };
    private readonly CancellationTokenSource _stop = new();
    private readonly Task _loop;
    private readonly Task _pings;
    private long? _stuckSince;
    private bool _pingFails;

    /// <summary>Starts beating.</summary>
    /// <param name="options">How long is stuck, where to ping.</param>
    /// <param name="pulse">Signs of life of the benches.</param>
    /// <param name="dispatch">Is told of a stuck loop.</param>
    /// <param name="manager">Is fed.</param>
    /// <param name="time">Clock of it all: life's, even in a rehearsal.</param>
    /// <param name="logger">For structured events.</param>
    /// <param name="end">Ends the process with a reason; null for the real thing.</param>
    public Heart(UnattendedOptions options, Pulse pulse, AlertDispatch dispatch, ServiceManager manager, TimeProvider time, ILogger logger, Action<string>? end = null)
    {
        (_options, _pulse, _dispatch, _manager, _time, _logger) = (options, pulse, dispatch, manager, time, logger);
        // Not Environment.Exit: it waits for what is stuck. The store outlives a kill at any instant.
        _end = end ?? Environment.FailFast;
        _loop = Task.Run(() => BeatAsync(_stop.Token));
        _pings = options.PingUrl is { } url ? Task.Run(() => PingAsync(new Uri(url), _stop.Token)) : Task.CompletedTask;
    }

    /// <inheritdoc/>
    public async ValueTask DisposeAsync()
    {
        await _stop.CancelAsync();
        await Task.WhenAll(_loop, _pings);
        _client.Dispose();
        _stop.Dispose();
    }

    private async Task BeatAsync(CancellationToken stop)
    {
        // Three beats within the manager's patience: one may be late.
        var between = _manager.WatchdogTime is { } patience && patience / 3 < Slowest ? patience / 3 : Slowest;
        using var timer = new PeriodicTimer(between, _time);
        try
        {
            do
            {
                Beat();
            }
            while (await timer.WaitForNextTickAsync(stop));
        }
        catch (OperationCanceledException) when (stop.IsCancellationRequested)
        {
            // The service ends in good order.
        }
    }

    private void Beat()
    {
        var stuck = _pulse.Stuck(_options.StuckAfterSeconds);
        if (stuck.Count == 0)
        {
            if (_stuckSince is not null)
            {
                _stuckSince = null;
                _dispatch.Clear(AlertCauses.LoopStuck);
            }

            _manager.Feed();
            return;
        }

        var benches = string.Join(", ", stuck);
        if (_stuckSince is null)
        {
            _stuckSince = _time.GetTimestamp();
            Log.LoopStuck(_logger, benches, _options.StuckAfterSeconds);
            _manager.Status($"stuck: {benches}");
            _dispatch.Raise(AlertCauses.LoopStuck, Severity.Critical,
                FormattableString.Invariant($"The watcher has handled no reading of {benches} for {_options.StuckAfterSeconds} s: these benches are not watched.")
                + (_options.EndWhenStuck ? " It ends itself now, to be started anew." : " Restart the service."));
        }
        else if (_options.EndWhenStuck && _time.GetElapsedTime(_stuckSince.Value) >= Grace)
        {
            _end($"Lampwarden: no reading of {benches} was handled in time; ending, to be started anew.");
        }
    }

    private async Task PingAsync(Uri url, CancellationToken stop)
    {
        using var timer = new PeriodicTimer(TimeSpan.FromSeconds(_options.PingSeconds), _time);
        try
        {
            do
            {
                if (_pulse.Stuck(_options.StuckAfterSeconds).Count == 0)
                {
                    await PingOnceAsync(url, stop);
                }
            }
            while (await timer.WaitForNextTickAsync(stop));
        }
        catch (OperationCanceledException) when (stop.IsCancellationRequested)
        {
            // The service ends; whoever counts the pings will notice, as it should be.
        }
    }

    private async Task PingOnceAsync(Uri url, CancellationToken stop)
    {
        using var deadline = CancellationTokenSource.CreateLinkedTokenSource(stop);
        deadline.CancelAfter(PingDeadline);
        try
        {
            using var answer = await _client.GetAsync(url, HttpCompletionOption.ResponseHeadersRead, deadline.Token);
            answer.EnsureSuccessStatusCode();
            if (_pingFails)
            {
                Log.PingWorksAgain(_logger);
            }

            _pingFails = false;
        }
        catch (Exception error) when (error is HttpRequestException || (error is OperationCanceledException && !stop.IsCancellationRequested))
        {
            if (!_pingFails)
            {
                Log.PingFails(_logger, url.GetLeftPart(UriPartial.Authority), error.Message);
            }

            _pingFails = true;
        }
    }
}
