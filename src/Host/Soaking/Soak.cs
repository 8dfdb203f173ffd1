using System.Text.Json;
using System.Threading.Channels;
using Lampwarden.Acquisition;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Soaking;

/// <summary>
/// One soak on one bench, from waiting for switch-on to the verdict: meter events become observations, which are
/// recorded, weighed by the watch, and turned into alerts, in this order. One loop owns all of it.
/// </summary>
public sealed class Soak
{
    private readonly BenchPlan _plan;
    private readonly SoakStore _store;
    private readonly SoakSurroundings _around;
    private readonly SoakLedger _ledger;
    private readonly AlertBook _alerts;
    private readonly MeterRoll _meters;
    private readonly Channel<SoakInput> _inputs = Channel.CreateBounded<SoakInput>(
        new BoundedChannelOptions(4096) { SingleReader = true, FullMode = BoundedChannelFullMode.Wait });

    private RunRecorder? _recorder;
    private Action<AlertChange>? _tell;
    private double _originSeconds;
    private double _firstPollSeconds = double.NaN;

    /// <summary>Prepares a soak; nothing is opened yet.</summary>
    public Soak(BenchPlan plan, SoakStore store, SoakSurroundings around)
    {
        (_plan, _store, _around) = (plan, store, around);
        _ledger = new SoakLedger(plan.WatchSettings);
        _alerts = new AlertBook(plan.Name);
        _meters = new MeterRoll(plan, around);
    }

    /// <summary>Runs until the planned hours are over or <paramref name="stop"/> says so; either way the run is closed and stored.</summary>
    /// <returns>What came of it; null where it was stopped before any current flowed.</returns>
    public async Task<SoakDocument?> RunAsync(CancellationToken stop)
    {
        Log.WaitingForSwitchOn(_around.Logger, _plan.Name, _plan.Options.Soak.SwitchOnWaitSeconds);
        await using var teller = new AlertTeller(_around.Routes, FlushAsync, _around.Logger);
        _tell = teller.Tell;
        using var ending = CancellationTokenSource.CreateLinkedTokenSource(stop);
        var pumps = _meters.PumpAsync(_inputs.Writer, ending.Token);
        try
        {
            await foreach (var input in _inputs.Reader.ReadAllAsync(stop))
            {
                if (!await TakeAsync(input, stop))
                {
                    break;
                }
            }
        }
        catch (OperationCanceledException) when (stop.IsCancellationRequested)
        {
            // Ended by the user or the system: what was read so far is still closed and judged below.
        }
        finally
        {
            await ending.CancelAsync();
            await pumps;
        }

        await teller.DisposeAsync();
        return _recorder is null ? null : await CloseAsync();
    }

    /// <summary>Somebody has seen an alert. Safe from any thread; carried out by the soak's loop.</summary>
    public void Acknowledge(int alertNumber, string? by = null) => _inputs.Writer.TryWrite(new SoakInput(null, default, soak =>
        soak.Publish(soak._alerts.Acknowledge(alertNumber, soak._ledger.LastSeconds, by))));

    /// <summary>Somebody changed something on the bench. Safe from any thread; carried out by the soak's loop.</summary>
    public void Announce(Announcement what) => _inputs.Writer.TryWrite(new SoakInput(null, default, soak =>
        soak.Publish(soak._ledger.Watch.Announce(soak._ledger.LastSeconds, what))));

    /// <returns>False when the planned time is over.</returns>
    private async ValueTask<bool> TakeAsync(SoakInput input, CancellationToken stop)
    {
        if (input.Do is { } action)
        {
            action(this);
            return true;
        }

        if (!_meters.Take(input.Meter!, input.Event, out var look))
        {
            return true;
        }

        if (_recorder is null && !await BeginIfSwitchedOnAsync(look, stop))
        {
            return true;
        }

        // The store keeps milliseconds; the watch is given the same, so that a stored run replays bit for bit.
        var seconds = Math.Round(Math.Max(0, look.ElapsedSeconds - _originSeconds), 3);
        Observe(new Observation(seconds, look.LineAmps, look.MainsVolts), look);
        return seconds < _plan.PlannedSeconds;
    }

    private async Task<bool> BeginIfSwitchedOnAsync(BenchLook look, CancellationToken stop)
    {
        _firstPollSeconds = double.IsNaN(_firstPollSeconds) ? look.ElapsedSeconds : _firstPollSeconds;
        var waitedSeconds = look.ElapsedSeconds - _firstPollSeconds;
        if (!(look.LineAmps > _plan.SwitchedOnAmps) && waitedSeconds < _plan.Options.Soak.SwitchOnWaitSeconds)
        {
            Tell(new WaitingForSwitchOn(_plan.Name, look.LineAmps));
            return false;
        }

        // Current flowed for some part of this reading's window: the window's start is the latest sure time before it.
        _originSeconds = look.ElapsedSeconds - _plan.LineMeter.WindowSeconds;
        var recorder = await _store.BeginRunAsync(new RunStart
        {
            Bench = _plan.Name,
            Unit = _plan.Unit.Text,
            Bank = _plan.Bank.Text,
            Mains = _plan.Mains.ToString(),
            PlannedHours = _plan.Options.Soak.PlannedHours,
            ConfigurationJson = JsonSerializer.Serialize(_plan.Options, Json.Compact),
            PredictionJson = JsonSerializer.Serialize(_plan.Prediction, Json.Compact),
            Software = Product.NameAndVersion,
            StartedUtc = look.Utc,
        }, stop);
        _recorder = recorder;
        Log.SoakStarted(_around.Logger, _plan.Name, recorder.Run, _plan.Unit.Text, _plan.Bank.Text, _plan.Mains.ToString());
        Tell(new RunBegan(_plan.Name, recorder.Run, _plan, look.Utc));
        return true;
    }

    private void Observe(in Observation observation, in BenchLook look)
    {
        if (observation.IsGap)
        {
            _recorder!.AppendMissed(observation.Seconds, look.Reason, look.Detail);
        }
        else
        {
            _recorder!.Append(new LineReading(observation.Seconds, observation.LineAmps, look.AmpsDecimals, observation.MainsVolts, look.VoltsDecimals));
        }

        var changes = _ledger.Take(observation, look.Reason);
        Tell(new Observed(_plan.Name, observation, _ledger.Watch.Phase));
        Publish(changes);
        foreach (var change in _alerts.Tick(observation.Seconds))
        {
            Publish(change);
        }
    }

    private void Publish(IReadOnlyList<FindingChange> changes)
    {
        for (var index = 0; index < changes.Count; index++)
        {
            _recorder!.AppendFinding(_ledger.LastSeconds, changes[index]);
            Tell(new FindingChanged(_plan.Name, _ledger.LastSeconds, changes[index]));
            Publish(_alerts.Take(changes[index], _ledger.LastSeconds));
        }
    }

    private void Publish(AlertChange? change)
    {
        if (change is null || _recorder is null)
        {
            return;
        }

        var alert = change.Alert;
        _recorder.AppendAlert(new StoredAlertChange(
            change.Seconds, _around.Time.GetUtcNow(), FormattableString.Invariant($"{alert.Number}"), change.What, alert.State.ToString(), change.By, alert.Text,
            JsonSerializer.Serialize(change, Json.Compact)));
        Tell(new AlertChanged(_plan.Name, change));
        _tell!(change);
    }

    private Task FlushAsync(CancellationToken cancellation) => _recorder?.FlushAsync(cancellation) ?? Task.CompletedTask;

    private async Task<SoakDocument> CloseAsync()
    {
        var (document, judgement) = _ledger.Close(_ledger.LastSeconds);
        var end = new RunEnd(judgement.Verdict, judgement.Reasons, JsonSerializer.Serialize(judgement.Summary, Json.Compact), _ledger.LastSeconds);
        if (!await _recorder!.EndAsync(end))
        {
            throw new StoreException($"{_plan.Name}: run {_recorder.Run} ended, but its end could not be stored: {_store.Health.Trouble}");
        }

        Log.SoakEnded(_around.Logger, _plan.Name, _recorder.Run, judgement.Verdict.Text(), _ledger.LastSeconds, _ledger.Readings);
        document = document with { Run = _recorder.Run, Record = _store.FilePath };
        Tell(new RunEnded(_plan.Name, _ledger.LastSeconds, document, judgement));
        return document;
    }

    private void Tell(SoakEvent happened)
    {
        foreach (var listener in _around.Listeners)
        {
            listener.Hear(happened);
        }
    }
}
