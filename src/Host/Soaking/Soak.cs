using System.Text.Json;
using System.Threading.Channels;
using Lampwarden.Acquisition;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Reporting;

namespace Lampwarden.Host.Soaking;

/// <summary>
/// One soak on one bench, from waiting for switch-on to the verdict: meter events become observations, which are
/// recorded, weighed by the watch, and turned into alerts, in this order. One loop owns all of it.
/// </summary>
public sealed partial class Soak
{
    private const double ReopeningSeconds = 10;

    private readonly BenchPlan _plan;
    private readonly SoakStore _store;
    private readonly SoakSurroundings _around;
    private readonly SoakLedger _ledger;
    private readonly AlertBook _alerts;
    private readonly MeterRoll _meters;
    private readonly Channel<SoakInput> _inputs = Channel.CreateBounded<SoakInput>(
        new BoundedChannelOptions(4096) { SingleReader = true, FullMode = BoundedChannelFullMode.Wait });

    private readonly BringUp? _bringUp;
    private readonly SoakResumption? _resumption;

    private RunRecorder? _recorder;
    private Action<AlertChange>? _tell;
    private RunEnded? _left;
    private double _originSeconds;
    private double _firstPollSeconds = double.NaN;
    private double _excusedUntilSeconds = double.NegativeInfinity;

    /// <summary>Prepares a soak; nothing is opened yet.</summary>
    /// <param name="plan">Bank, unit, meters and hours.</param>
    /// <param name="store">Takes the run.</param>
    /// <param name="around">Clock, log, routes, listeners.</param>
    /// <param name="bringUp">Where the bank is switched in lamp by lamp: the steps; the last is the plan's own bank.</param>
    /// <param name="resumption">The run that this one carries on; null for a soak of its own.</param>
    public Soak(BenchPlan plan, SoakStore store, SoakSurroundings around, BringUp? bringUp = null, SoakResumption? resumption = null)
    {
        if (plan.Options.UnitModel is { } model)
        {
            plan = plan.HeldTo(ReferenceUnits.BandFor(store, model, plan.Bank.Text, plan.Mains.ToString(), plan.Prediction.Steady.LineAmps));
        }

        (_plan, _store, _around, _bringUp, _resumption) = (plan, store, around, bringUp, resumption);
        _ledger = new SoakLedger(resumption is not null ? AnnouncementReplay.SettingsOf(resumption.Announcements, plan.WatchSettings)
            : bringUp is not null ? plan.WatchSettings with { Expectation = bringUp.Plan.WatchSettings.Expectation }
            : plan.WatchSettings);
        _alerts = new AlertBook(plan.Name, around.Rules);
        _meters = new MeterRoll(plan, around);
    }

    /// <summary>Runs until the planned hours are over or <paramref name="stop"/> says so; either way the run is closed and stored.</summary>
    /// <param name="stop">Ends the soak.</param>
    /// <param name="serviceStop">Ended too where it is the service that ends: the run can then be carried on later.</param>
    /// <returns>What came of it; null where it was stopped before any current flowed.</returns>
    public async Task<SoakDocument?> RunAsync(CancellationToken stop, CancellationToken serviceStop = default)
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
            _inputs.Writer.TryComplete();
        }

        // Whoever asked for something too late is answered all the same.
        while (_inputs.Reader.TryRead(out var late))
        {
            late.Do?.Invoke(this);
        }

        await teller.DisposeAsync();
        return _recorder is null ? null : await CloseAsync(serviceStop.IsCancellationRequested);
    }

    /// <summary>The run's id; null before it began. Safe from any thread.</summary>
    public string? Run => _recorder?.Run;

    /// <summary>What becomes of the alerts that the closed run left open; null where it left none. To be asked once, after the end.</summary>
    public AlertAftermath? LeaveAlerts() => _left is null ? null : new AlertAftermath(_alerts, _left, _store, _around);

    /// <summary>How the meters are doing. Safe from any thread.</summary>
    public IReadOnlyList<(MeterOptions Meter, MeterHealth Health)> Meters => _meters.Health;

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

        // The store keeps milliseconds and the decimal as sent; the watch is given the same, so that a stored run replays bit for bit.
        var kept = new LineReading(
            Math.Max(0, look.ElapsedSeconds - _originSeconds), look.LineAmps, look.AmpsDecimals, look.MainsVolts, look.VoltsDecimals);
        Observe(kept, look);
        return kept.Seconds < _plan.PlannedSeconds;
    }

    private async Task<bool> BeginIfSwitchedOnAsync(BenchLook look, CancellationToken stop)
    {
        _firstPollSeconds = double.IsNaN(_firstPollSeconds) ? look.ElapsedSeconds : _firstPollSeconds;
        var waitedSeconds = look.ElapsedSeconds - _firstPollSeconds;
        if (_resumption is null && !(look.LineAmps > _plan.SwitchedOnAmps) && waitedSeconds < _plan.Options.Soak.SwitchOnWaitSeconds)
        {
            Tell(new WaitingForSwitchOn(_plan.Name, look.LineAmps));
            return false;
        }

        // Current flowed for some part of this reading's window: the window's start is the latest sure time before it.
        _originSeconds = look.ElapsedSeconds - _plan.LineMeter.WindowSeconds;
        var leftOffSeconds = _resumption is null ? double.NaN : CarryOn(_resumption, look);
        var start = new RunStart
        {
            Bench = _plan.Name,
            Unit = _plan.Unit.Text,
            Bank = _plan.Bank.Text,
            Mains = _plan.Mains.ToString(),
            PlannedHours = _plan.Options.Soak.PlannedHours,
            ConfigurationJson = JsonSerializer.Serialize(_plan.Options, Json.Compact),
            PredictionJson = JsonSerializer.Serialize(_plan.Prediction, Json.Compact),
            Software = Product.NameAndVersion,
            StartedUtc = _resumption?.StartedUtc ?? look.Utc,
            UnitLabel = _plan.Options.UnitLabel,
        };
        var recorder = await _store.BeginRunAsync(start with { ResumedFrom = _resumption?.Last.Run ?? _store.TakeInterrupted(start) }, stop);
        _recorder = recorder;
        if (_resumption is not null)
        {
            var until = Math.Max(leftOffSeconds, look.ElapsedSeconds - _originSeconds - _plan.LineMeter.WindowSeconds);
            recorder.AppendMissed(new LineReading(until, double.NaN), SoakResumption.GapReason, "the service did not run");
            Log.SoakResumed(_around.Logger, _plan.Name, _resumption.Last.Run, leftOffSeconds, look.ElapsedSeconds - _originSeconds);
        }

        Log.SoakStarted(_around.Logger, _plan.Name, recorder.Run, _plan.Unit.Text, _plan.Bank.Text, _plan.Mains.ToString());
        Tell(new RunBegan(_plan.Name, recorder.Run, _bringUp?.Plan ?? _plan, look.Utc));
        if (_resumption is not null)
        {
            TellWhatStands();
        }

        if (_bringUp is not null)
        {
            if (_resumption is null)
            {
                recorder.AppendAnnouncement(AnnouncementReplay.Begun(_bringUp.Plan));
            }

            Tell(new BringUpMoved(_plan.Name, _bringUp.Status));
        }

        return true;
    }

    private void Observe(in LineReading kept, in BenchLook look)
    {
        var observation = new Observation(kept.Seconds, kept.Amps, kept.MainsVolts);
        if (observation.IsGap)
        {
            _recorder!.AppendMissed(kept, look.Reason, look.Detail);
        }
        else
        {
            _recorder!.Append(kept);
        }

        if (_bringUp is not null)
        {
            Follow(_bringUp.Take(observation));
        }

        // While meters are being opened again the absence is the service's own, on record, and no fault of theirs.
        var excused = observation.IsGap && observation.Seconds < _excusedUntilSeconds;
        var changes = excused ? [] : Excuse(_ledger.Take(observation, look.Reason));
        Tell(new Observed(_plan.Name, observation, _ledger.Watch.Phase, () => _ledger.Watch.Sentence) { Utc = look.Utc });
        Publish(changes);
        foreach (var change in _alerts.Tick(observation.Seconds))
        {
            Publish(change);
        }
    }

    // A lamp that was switched in is announced to the watch before the reading that shows it is weighed, so that the watch
    // does not take a step that was meant for a fault.
    private bool Follow(BringUpMove? move)
    {
        if (move is null)
        {
            return false;
        }

        if (move.Announcement is not null)
        {
            Announce(move.Announcement);
            Tell(new PlanChanged(_plan.Name, _bringUp!.Plan));
        }

        if (_bringUp!.Status.Over)
        {
            _recorder!.AppendAnnouncement(new StoredAnnouncement(_ledger.LastSeconds, AnnouncementReplay.BringUpOver));
        }

        if (move.Note is not null)
        {
            _ = NoteAsync(move.Note, _ledger.LastSeconds);
        }

        Tell(new BringUpMoved(_plan.Name, _bringUp.Status));
        return true;
    }

    private void Announce(Announcement what)
    {
        _recorder!.AppendAnnouncement(AnnouncementReplay.Row(_ledger.LastSeconds, what));
        Publish(_ledger.Watch.Announce(_ledger.LastSeconds, what));
    }

    private async Task NoteAsync(string text, double seconds)
    {
        try
        {
            await _store.AddNoteAsync(_recorder!.Run, text, atSeconds: seconds);
        }
        catch (StoreException error)
        {
            // The run goes on; the readings show what the note would have said.
            Log.NoteNotStored(_around.Logger, error, _plan.Name);
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

        _recorder.AppendAlert(AlertRows.Of(change, _around.Time.GetUtcNow()));
        Tell(new AlertChanged(_plan.Name, change));
        _tell!(change);
    }

    private async Task FlushAsync(CancellationToken cancellation)
    {
        if (_recorder is not null && !await _recorder.FlushAsync(cancellation))
        {
            throw new StoreException(_store.Health.Trouble ?? "The store takes nothing more.");
        }
    }

    private async Task<SoakDocument> CloseAsync(bool serviceStops)
    {
        var (document, judgement) = _ledger.Close(_ledger.LastSeconds);
        if (serviceStops && _ledger.LastSeconds < _plan.PlannedSeconds)
        {
            // Whatever the verdict: a unit that has failed is still live, and the next service watches it on.
            judgement = judgement with { Reasons = [.. judgement.Reasons, SoakResumption.StoppedReason] };
        }

        var end = new RunEnd(judgement.Verdict, judgement.Reasons, JsonSerializer.Serialize(judgement.Summary, Json.Compact), _ledger.LastSeconds);
        if (!await _recorder!.EndAsync(end))
        {
            throw new StoreException($"{_plan.Name}: run {_recorder.Run} ended, but its end could not be stored: {_store.Health.Trouble}");
        }

        Log.SoakEnded(_around.Logger, _plan.Name, _recorder.Run, judgement.Verdict.Text(), _ledger.LastSeconds, _ledger.Readings);
        document = document with { Run = _recorder.Run, Record = _store.FilePath };
        var ended = new RunEnded(_plan.Name, _ledger.LastSeconds, document, judgement);
        Tell(ended);
        _left = _alerts.Alerts.Any(alert => alert.IsOpen) ? ended : null;
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
