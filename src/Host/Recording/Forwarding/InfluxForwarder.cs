using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Recording.Forwarding;

/// <summary>How forwarding goes.</summary>
/// <param name="Sent">Points the server has confirmed since the start; repeats count again.</param>
/// <param name="Parked">Points put aside since the start because the server will never take them.</param>
/// <param name="Trouble">Why nothing goes at present; null while all is well.</param>
/// <param name="Halted">Forwarding has stopped until the service is started anew; the store keeps everything meanwhile.</param>
public sealed record ForwardingHealth(long Sent, long Parked, string? Trouble, bool Halted);

/// <summary>
/// Sends what the store holds to one InfluxDB server. The store is the outbox and keeps a cursor for each run, moved on only
/// after the server's answer: at least once, in order, across restarts of either side. Reads the store like any reader, so
/// it never holds back the watch. Not safe for several threads; <see cref="Health"/> is.
/// </summary>
public sealed class InfluxForwarder : IDisposable
{
    private const int BatchPoints = 10_000;
    private const int ParkedOneByOne = 50;
    private static readonly TimeSpan LongestWait = TimeSpan.FromSeconds(30);

    private readonly SoakStore _store;
    private readonly InfluxTarget _target;
    private readonly TimeProvider _time;
    private long _sent;
    private long _parked;

    /// <param name="time">For the waits between tries; real time in the service.</param>
    /// <exception cref="StoreException">The token's file cannot be read.</exception>
    public InfluxForwarder(SoakStore store, InfluxOptions options, TimeProvider time)
    {
        (_store, _time) = (store, time);
        _target = new InfluxTarget(options);
    }

    /// <summary>How forwarding goes.</summary>
    public ForwardingHealth Health { get; private set; } = new(0, 0, null, false);

    /// <summary>Where troubles are told.</summary>
    public ILogger Logger { get; set; } = Microsoft.Extensions.Logging.Abstractions.NullLogger.Instance;

    /// <summary>Forwards until stopped or halted.</summary>
    public async Task RunAsync(CancellationToken stop)
    {
        var wait = TimeSpan.FromSeconds(1);
        while (!stop.IsCancellationRequested && !Health.Halted)
        {
            var (more, outcome) = await RoundAsync(stop);
            var failed = outcome.Result != SendResult.Sent;
            if (failed && !Health.Halted)
            {
                await Task.Delay(outcome.After ?? wait, _time, stop);
                wait = wait * 2 < LongestWait ? wait * 2 : LongestWait;
                continue;
            }

            wait = TimeSpan.FromSeconds(1);
            if (!more)
            {
                await Task.Delay(TimeSpan.FromSeconds(1), _time, stop);
            }
        }
    }

    /// <summary>Sends at most one batch of every run that has something to send.</summary>
    /// <returns>Whether a run has more to send at once, and what became of the last batch.</returns>
    internal async Task<(bool More, SendOutcome Outcome)> RoundAsync(CancellationToken cancellationToken)
    {
        var (more, moved) = (false, new List<(OutboxRun Run, OutboxCursor To)>());
        var outcome = new SendOutcome(SendResult.Sent);
        foreach (var run in _store.Outbox(_target.Name))
        {
            var (points, to) = _store.Collect(run, BatchPoints);
            if (points.Count == 0)
            {
                continue;
            }

            outcome = await SendOrParkAsync(run, points, cancellationToken);
            if (outcome.Result != SendResult.Sent)
            {
                break;
            }

            moved.Add((run, to));
            more |= points.Count >= BatchPoints;
        }

        if (moved.Count > 0)
        {
            await _store.MoveCursorsAsync(_target.Name, moved, cancellationToken);
        }

        Tell(outcome);
        return (more, outcome);
    }

    /// <inheritdoc/>
    public void Dispose() => _target.Dispose();

    // A refused batch is halved until the culprits stand alone; they are put aside and the rest goes through. A batch that
    // is bad throughout is put aside in blocks after some single ones, or it would cost two requests a point.
    private async Task<SendOutcome> SendOrParkAsync(OutboxRun run, List<string> points, CancellationToken cancellationToken)
    {
        var parkedAlone = 0;
        var waiting = new Stack<List<string>>([points]);
        while (waiting.TryPop(out var part))
        {
            var outcome = await _target.SendAsync(part, cancellationToken);
            switch (outcome.Result)
            {
                case SendResult.Sent:
                    _sent += part.Count;
                    break;
                case SendResult.Refused when part.Count > 1 && parkedAlone < ParkedOneByOne:
                    waiting.Push(part[(part.Count / 2)..]);
                    waiting.Push(part[..(part.Count / 2)]);
                    break;
                case SendResult.Refused:
                    await _store.ParkAsync(_target.Name, run.Key, outcome.Why!, part, cancellationToken);
                    Log.PointsParked(Logger, part.Count, run.Id, outcome.Why!);
                    parkedAlone++;
                    _parked += part.Count;
                    break;
                default:
                    return outcome;
            }
        }

        return new SendOutcome(SendResult.Sent);
    }

    private void Tell(in SendOutcome outcome)
    {
        var before = Health;
        Health = new ForwardingHealth(_sent, _parked, outcome.Why, outcome.Result == SendResult.Halted);
        if (Health.Halted)
        {
            Log.ForwardingHalted(Logger, outcome.Why!);
        }
        else if (outcome.Why is { } why && before.Trouble is null)
        {
            Log.ForwardingWaits(Logger, why);
        }
        else if (outcome.Why is null && before.Trouble is not null)
        {
            Log.ForwardingGoesOn(Logger);
        }
    }
}
