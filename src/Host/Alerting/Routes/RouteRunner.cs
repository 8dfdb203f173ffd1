using System.Threading.Channels;
using Lampwarden.Analysis.Watching;
using Polly;
using Polly.Retry;
using Polly.Timeout;

namespace Lampwarden.Host.Alerting.Routes;

/// <summary>
/// Runs one route on its own loop, behind its own bounded queue: retries with growing, spread-out pauses, a deadline for
/// each attempt and each message, a rate limit, grouping in a flood, and its own health. Telling it never waits.
/// </summary>
public sealed partial class RouteRunner : IAlertRoute, IAsyncDisposable
{
    private readonly IAlertRoute _route;
    private readonly TimeProvider _time;
    private readonly ILogger _logger;
    private readonly Action<RouteRunner, IReadOnlyList<AlertChange>> _turned;
    private readonly Channel<AlertChange> _queue;
    private readonly ResiliencePipeline _pipeline;
    private readonly CancellationTokenSource _stop = new();
    private readonly List<AlertChange> _pending = [];
    private readonly Pace _pace;
    private readonly Task _loop;

    /// <summary>Starts the loop.</summary>
    /// <param name="route">What does the telling; disposed with this.</param>
    /// <param name="settings">How it is used.</param>
    /// <param name="time">Clock of pauses and deadlines.</param>
    /// <param name="logger">For its own events.</param>
    /// <param name="turned">Called when it goes down (with what is untold) or works again (with nothing); must not block.</param>
    public RouteRunner(IAlertRoute route, RouteSettings settings, TimeProvider time, ILogger logger, Action<RouteRunner, IReadOnlyList<AlertChange>>? turned = null)
    {
        (_route, Settings, _time, _logger, _turned) = (route, settings, time, logger, turned ?? ((_, _) => { }));
        _pace = new Pace(settings.AtMostPerMinute);
        _queue = Channel.CreateBounded<AlertChange>(
            new BoundedChannelOptions(settings.QueueLength) { SingleReader = true, FullMode = BoundedChannelFullMode.DropOldest }, Dropped);
        _pipeline = new ResiliencePipelineBuilder { TimeProvider = time }
            .AddTimeout(new TimeoutStrategyOptions { Timeout = settings.GiveUp })
            .AddRetry(new RetryStrategyOptions
            {
                ShouldHandle = arguments => ValueTask.FromResult(arguments.Outcome.Exception is { } error and not RouteRefusedException
                    && !(error is OperationCanceledException && arguments.Context.CancellationToken.IsCancellationRequested)),
                MaxRetryAttempts = int.MaxValue,
                BackoffType = DelayBackoffType.Exponential,
                UseJitter = true,
                Delay = TimeSpan.FromSeconds(1),
                MaxDelay = TimeSpan.FromMinutes(1),
                DelayGenerator = arguments => ValueTask.FromResult(Asked(arguments.Outcome.Exception)),
                OnRetry = Failed,
            })
            .AddTimeout(new TimeoutStrategyOptions { Timeout = settings.Attempt })
            .Build();
        _loop = Task.Run(() => RunAsync(_stop.Token));
    }

    /// <inheritdoc/>
    public string Name => _route.Name;

    /// <summary>How it is used.</summary>
    public RouteSettings Settings { get; }

    /// <summary>Hands a change over; never waits. A full queue drops its oldest change, counted and logged.</summary>
    public void Tell(AlertChange change)
    {
        Interlocked.Increment(ref _taken);
        if (!_queue.Writer.TryWrite(change))
        {
            // Closed: the service is ending.
            Dropped(change);
        }
    }

    /// <inheritdoc/>
    Task IAlertRoute.TellAsync(AlertChange change, CancellationToken cancellation)
    {
        Tell(change);
        return Task.CompletedTask;
    }

    /// <summary>Waits for a route that keeps a connection to have one, at most so long.</summary>
    public Task WaitForConnectionAsync(TimeSpan longest, CancellationToken cancellation) =>
        _route is MqttRoute mqtt ? mqtt.WaitForConnectionAsync(longest, cancellation) : Task.CompletedTask;

    /// <summary>Tells one change now, past queue and retries, for a test button.</summary>
    /// <exception cref="RouteException">It was not told.</exception>
    public async Task TryAsync(AlertChange change, CancellationToken cancellation)
    {
        using var deadline = CancellationTokenSource.CreateLinkedTokenSource(cancellation);
        deadline.CancelAfter(Settings.Attempt);
        try
        {
            await _route.TellAsync(change, deadline.Token).WaitAsync(deadline.Token);
        }
        catch (OperationCanceledException) when (!cancellation.IsCancellationRequested)
        {
            throw new RouteException(FormattableString.Invariant($"no answer within {Settings.Attempt.TotalSeconds} s"));
        }
    }

    /// <summary>Gives what waits a last chance, then stops.</summary>
    public async ValueTask DisposeAsync()
    {
        _queue.Writer.TryComplete();
        _stop.CancelAfter(Settings.LastChance);
        await _loop;
        _stop.Dispose();
        if (_route is IAsyncDisposable asynchronous)
        {
            await asynchronous.DisposeAsync();
        }

        (_route as IDisposable)?.Dispose();
    }

    private async Task RunAsync(CancellationToken stop)
    {
        try
        {
            while (_pending.Count > 0 || await _queue.Reader.WaitToReadAsync(stop))
            {
                Drain();
                var wait = _pace.WaitSeconds(Seconds, _pending.Exists(change => change.Alert.Severity == Severity.Critical));
                if (wait > 0)
                {
                    // Short steps: something critical may come meanwhile and shorten the wait.
                    await Task.Delay(TimeSpan.FromSeconds(Math.Min(wait, 1)), _time, stop);
                    _held = true;
                    continue;
                }

                await SendAsync(Next(), stop);
            }
        }
        catch (OperationCanceledException) when (stop.IsCancellationRequested)
        {
            // Ending: what is left is counted as waiting, and the store knows that it was never told.
        }
    }

    private void Drain()
    {
        while (_queue.Reader.TryRead(out var change))
        {
            _pending.Add(change);
            if (change.What is AlertSteps.Raised && _pace.Flood.Raised(Seconds) && Settings.Groups)
            {
                Log.AlertFlood(_logger, Name, _pace.Flood.Count);
            }
        }
    }

    /// <summary>One change, or all that wait as one message: in a flood, after the rate limit, and after a time of failing.</summary>
    private AlertChange Next()
    {
        var grouped = Settings.Groups && _pending.Count > 1 && (_pace.Flood.InFlood || _held || _state == RouteState.Down);
        var next = grouped ? Group() : _pending[0];
        _held &= _pending.Count > 1 && !grouped;
        return next;
    }

    private AlertChange Group()
    {
        AlertChange[] changes = [.. _pending];
        var worst = changes.MaxBy(change => change.Alert.Severity)!;
        var benches = string.Join(", ", changes.Select(change => change.Alert.Bench).Distinct());
        var text = $"{changes.Length} changes told together, on {benches}."
            + (_pace.Flood.InFlood ? FormattableString.Invariant($" {_pace.Flood.Count} alerts came within ten minutes: look for one common cause first, such as the mains.") : "");
        return new AlertChange(worst.Seconds, AlertSteps.Grouped, worst.Alert with { Text = text, Number = 0 }) { Utc = changes[^1].Utc, Group = changes };
    }

    private async Task SendAsync(AlertChange change, CancellationToken stop)
    {
        var count = change.Group?.Count ?? 1;
        try
        {
            // A route that ignores its token is left behind: its deadline holds all the same.
            await _pipeline.ExecuteAsync(async token => await _route.TellAsync(change, token).WaitAsync(token), stop);
            _pace.Sent(Seconds);
            _pending.RemoveRange(0, count);
            Succeeded(count);
        }
        catch (Exception error) when (error is not OutOfMemoryException && !stop.IsCancellationRequested)
        {
            _pace.Sent(Seconds);
            GaveUp(count, error);
        }
    }

    private double Seconds => _time.GetElapsedTime(0).TotalSeconds;
}
