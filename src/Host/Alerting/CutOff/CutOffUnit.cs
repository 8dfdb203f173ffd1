using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Alerting.CutOff;

/// <summary>What a cut-off does to the world around it.</summary>
/// <param name="SilentSeconds">Seconds since the bench's loop handled a reading; null where no soak is under way.</param>
/// <param name="StuckAfterSeconds">Silence beyond which no keep-alive is sent.</param>
/// <param name="Raise">Tells people: cause, severity, text.</param>
/// <param name="Clear">Takes it back: cause, how the text began.</param>
public sealed record CutOffSurroundings(Func<double?> SilentSeconds, double StuckAfterSeconds, Action<string, Severity, string> Raise, Action<string, string> Clear);

/// <summary>
/// The cut-off of one bench: trips on the findings it was given, stays tripped until a person resets it, and never lets a
/// contactor close by itself. A convenience, no protective device.
/// </summary>
public sealed partial class CutOffUnit : IAsyncDisposable
{
    private static readonly TimeSpan LongestPause = TimeSpan.FromSeconds(5);

    private readonly Lock _gate = new();
    private readonly CutOffOptions _options;
    private readonly CutOffOutputOptions _wire;
    private readonly CutOffSender _sender;
    private readonly CutOffFile _file;
    private readonly CutOffSurroundings _around;
    private readonly TimeProvider _time;
    private readonly ILogger _logger;
    private readonly SemaphoreSlim _wake = new(0);
    private readonly CancellationTokenSource _stop = new();
    private readonly Dictionary<int, (Finding Finding, long Since)> _standing = [];
    private readonly Task _loop;
    private CutOffState _state;
    private bool _openSent;

    /// <summary>Takes up the state it was left in, and starts.</summary>
    /// <param name="output">The wire; null in a dry run.</param>
    public CutOffUnit(CutOffOptions options, CutOffOutputOptions wire, ICutOffOutput? output, CutOffFile file, CutOffSurroundings around, TimeProvider time, ILogger logger)
    {
        (_options, _wire, _file, _around, _time, _logger) = (options, wire, file, around, time, logger);
        _sender = new CutOffSender(options.DryRun ? null : output, wire.Bench, around, logger);
        _state = TakeUp();
        // What was open before the start is opened once more: the contactor may have been closed by hand meanwhile.
        _loop = Task.Run(() => RunAsync(_stop.Token));
    }

    /// <summary>The bench.</summary>
    public string Bench => _wire.Bench;

    /// <summary>Where it stands. Safe from any thread.</summary>
    public CutOffState State
    {
        get
        {
            lock (_gate)
            {
                return _state;
            }
        }
    }

    /// <summary>A finding changed. Never waits.</summary>
    public void Take(FindingChange change)
    {
        var finding = change.Finding;
        var trips = change.Kind != ChangeKind.Cleared && finding.Severity == Severity.Critical && _options.Trips.Contains(finding.Signature.Text());
        lock (_gate)
        {
            if (!trips)
            {
                _standing.Remove(finding.Number);
                return;
            }

            var since = _standing.TryGetValue(finding.Number, out var known) ? known.Since : _time.GetTimestamp();
            _standing[finding.Number] = (finding, since);
        }

        _wake.Release();
    }

    /// <summary>The run ended: its findings stand no more.</summary>
    public void Forget()
    {
        lock (_gate)
        {
            _standing.Clear();
        }
    }

    /// <summary>Stops. A contactor that needs keep-alives opens by itself afterwards.</summary>
    public async ValueTask DisposeAsync()
    {
        await _stop.CancelAsync();
        await _loop;
        await _sender.DisposeAsync();
        _wake.Dispose();
        _stop.Dispose();
    }

    private string Subject => $"'{Bench}'";

    private CutOffState TakeUp()
    {
        var now = _time.GetUtcNow();
        var before = _file.Load();
        if (before is null or { Position: CutOffPosition.Armed } && _wire.KeepAliveText is null)
        {
            return before ?? new CutOffState(CutOffPosition.Armed, now, "first start");
        }

        if (before is null)
        {
            return Lapse("it was never armed: a person closes the contactor the first time", now);
        }

        // Within its lapse time the contactor has not opened, so going on does not close it. A clock set back proves nothing.
        var silence = now - before.LastKeepAliveUtc;
        return before.Position != CutOffPosition.Armed || (silence >= TimeSpan.Zero && silence < TimeSpan.FromSeconds(_wire.LapseSeconds))
            ? before
            : Lapse("keep-alives were missing for longer than its lapse time", now);
    }

    private CutOffState Lapse(string why, DateTimeOffset utc)
    {
        if (_around.SilentSeconds() is not null)
        {
            _around.Raise(AlertCauses.CutOff, Severity.Warning, $"{Subject} is off: {why}. Look at the bench, then reset the cut-off.");
        }

        return new CutOffState(CutOffPosition.Lapsed, utc, why);
    }

    private async Task RunAsync(CancellationToken stop)
    {
        var pause = TimeSpan.FromSeconds(1);
        while (!stop.IsCancellationRequested)
        {
            try
            {
                TripIfDue();
                pause = await SendDueAsync(stop);
                TakeResetWish();
                await WaitAsync(pause, stop);
            }
            catch (OperationCanceledException) when (stop.IsCancellationRequested)
            {
                return;
            }
        }
    }

    private void TripIfDue()
    {
        lock (_gate)
        {
            var due = _standing.Values.Where(one => _time.GetElapsedTime(one.Since).TotalSeconds >= _options.OnDelaySeconds).ToList();
            if (_state.Position == CutOffPosition.Tripped || due.Count == 0)
            {
                return;
            }

            var finding = due[0].Finding;
            var now = _time.GetUtcNow();
            var signature = finding.Signature.Text();
            var evidence = finding.Evidence.ToDictionary(pair => pair.Key, pair => double.IsFinite(pair.Value) ? pair.Value : (double?)null);
            Become(
                new CutOffState(CutOffPosition.Tripped, now, $"{signature}: {finding.Explanation}"),
                new { utc = now, bench = Bench, what = _options.DryRun ? "would trip" : "tripped", signature, finding.Explanation, finding.OnsetSeconds, finding.RaisedSeconds, evidence });
            Log.CutOffTripped(_logger, Bench, signature, _options.DryRun);
            _around.Raise(AlertCauses.CutOff, Severity.Critical,
                $"{Subject} {(_options.DryRun ? "would be cut off now (dry run, nothing is sent)" : "is being cut off")}: {signature}. {finding.Explanation} The cut-off is no protective device: take the bench as live until you have seen it.");
        }
    }

    /// <summary>Sends what the state asks for.</summary>
    /// <returns>When to look again.</returns>
    private async Task<TimeSpan> SendDueAsync(CancellationToken stop)
    {
        var position = State.Position;
        if (position == CutOffPosition.Armed && _wire.KeepAliveText is { } keepAlive)
        {
            await KeepAliveAsync(keepAlive, stop);
            return TimeSpan.FromSeconds(_wire.KeepAliveSeconds);
        }

        if (position == CutOffPosition.Tripped && !_openSent)
        {
            _openSent = _wire.OpenText.Length == 0 || await _sender.TrySendAsync(_wire.OpenText, _wire.OpenAnswer, Severity.Critical, stop);
            return _openSent ? LongestPause : TimeSpan.FromSeconds(0.5);
        }

        return TimeSpan.FromSeconds(1);
    }

    private async Task KeepAliveAsync(string text, CancellationToken stop)
    {
        var now = _time.GetUtcNow();
        var silence = now - State.LastKeepAliveUtc;
        if (silence >= TimeSpan.FromSeconds(_wire.LapseSeconds))
        {
            lock (_gate)
            {
                Become(Lapse("keep-alives were missing for longer than its lapse time", now), new { utc = now, bench = Bench, what = "lapsed" });
            }

            return;
        }

        // A loop that handles no readings does not hold a contactor closed, and nor does a soak that is over.
        if (_around.SilentSeconds() < _around.StuckAfterSeconds && await _sender.TrySendAsync(text, null, Severity.Warning, stop))
        {
            lock (_gate)
            {
                if (_state.Position == CutOffPosition.Armed)
                {
                    _state = _state with { LastKeepAliveUtc = now };
                    Store(() => _file.Save(_state));
                }
            }
        }
    }

    private void Become(CutOffState state, object entry)
    {
        _state = state;
        // The contactor opens whatever the disk says: what cannot be stored is logged, not waited for.
        Store(() => _file.Save(state));
        Store(() => _file.Record(entry));
    }

    private void Store(Action write)
    {
        try
        {
            write();
        }
        catch (Exception error) when (error is IOException or UnauthorizedAccessException)
        {
            Log.CutOffNotStored(_logger, error, Bench);
        }
    }

    private async Task WaitAsync(TimeSpan pause, CancellationToken stop)
    {
        TimeSpan delay;
        lock (_gate)
        {
            var due = _standing.Count == 0 || _state.Position == CutOffPosition.Tripped
                ? pause
                : TimeSpan.FromSeconds(_standing.Values.Min(one => Math.Max(0.001, _options.OnDelaySeconds - _time.GetElapsedTime(one.Since).TotalSeconds)));
            delay = due < pause ? due : pause;
        }

        using var either = CancellationTokenSource.CreateLinkedTokenSource(stop);
        await Task.WhenAny(Task.Delay(delay, _time, either.Token), _wake.WaitAsync(either.Token));
        await either.CancelAsync();
        stop.ThrowIfCancellationRequested();
    }
}
