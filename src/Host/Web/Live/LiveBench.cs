using Lampwarden.Acquisition;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Web.Api;

namespace Lampwarden.Host.Web.Live;

/// <summary>What is known of one bench at this moment, as told by its soak. Thread-safe.</summary>
internal sealed class LiveBench
{
    // Longer than the pause between two readings of the slowest meter, and than any reopening that goes well.
    private const double BlindSeconds = 3;

    private readonly Lock _gate = new();
    private readonly SortedDictionary<int, Finding> _findings = [];
    private readonly SortedDictionary<int, Alert> _alerts = [];
    private readonly List<double> _newSeconds = [];
    private readonly List<double> _newAmps = [];
    private BenchPlan _plan;
    private BenchInstruments _instruments;
    private BankTree _tree;
    private LiveTrace _trace = new();
    private Observation _last = new(0, double.NaN);
    private double _lastReadingSeconds;
    private long _heard = TimeProvider.System.GetTimestamp();
    private string _phase = "idle";
    private bool _blind;
    private string? _sentence;
    private string? _run;
    private double _idleAmps = double.NaN;
    private DateTimeOffset? _startedUtc;
    private Verdict? _verdict;
    private IReadOnlyList<string> _reasons = [];
    private BringUpDocument? _bringUp;
    private bool _canStart;
    private bool _canEnd;
    private bool _changed = true;
    private bool _moved;

    public LiveBench(BenchPlan plan)
    {
        (_plan, _instruments, _tree) = (plan, new BenchInstruments(plan), BankTree.Of(plan.Bank));
    }

    /// <summary>Takes one event. Called on the soak's loop: short, and nothing here waits.</summary>
    public void Hear(SoakEvent happened)
    {
        lock (_gate)
        {
            _heard = TimeProvider.System.GetTimestamp();
            switch (happened)
            {
                case Observed observed:
                    Observe(observed);
                    return;
                case WaitingForSwitchOn waiting:
                    Wait(waiting.LineAmps);
                    return;
                case IdleLook look:
                    _last = new Observation(_last.Seconds, look.LineAmps, look.MainsVolts);
                    (_idleAmps, _moved) = (look.LineAmps, _phase is "idle");
                    return;
                case DeskChanged desk:
                    Rest(desk);
                    break;
                case PlanChanged planned:
                    Take(planned.Plan);
                    break;
                case RunBegan began:
                    Begin(began);
                    break;
                case FindingChanged change:
                    _findings[change.Change.Finding.Number] = change.Change.Finding;
                    break;
                case AlertChanged change:
                    _alerts[change.Change.Alert.Number] = change.Change.Alert;
                    break;
                case BringUpMoved moved:
                    _bringUp = new BringUpDocument(PredictEndpoints.Documents(moved.Status.Steps), moved.Status.At, moved.Status.State, moved.Status.Sentence, moved.Status.Over);
                    break;
                case RunEnded ended:
                    (_phase, _verdict, _reasons, _bringUp) = ("ended", ended.Judgement.Verdict, ended.Judgement.Reasons, null);
                    break;
                default:
                    return;
            }

            _changed = true;
        }
    }

    /// <summary>What is to be sent since the last time: the whole bench where something of it changed, its instruments, its readings.</summary>
    public (BenchDocument? Changed, NowDocument? Now, ReadingsDocument? Readings) Collect(double stuckSeconds)
    {
        lock (_gate)
        {
            if (_phase is not ("idle" or "ended") && !_blind && TimeProvider.System.GetElapsedTime(_heard).TotalSeconds > stuckSeconds)
            {
                // Not even a gap has come: the loop itself is stuck.
                (_blind, _changed) = (true, true);
            }

            var readings = _newSeconds.Count > 0 && _run is not null ? new ReadingsDocument(_plan.Name, _run, [.. _newSeconds], [.. _newAmps]) : null;
            _newSeconds.Clear();
            _newAmps.Clear();
            var changed = _changed ? Document() : null;
            var now = _moved && !_changed ? Now() : null;
            (_changed, _moved) = (false, false);
            return (changed, now, readings);
        }
    }

    /// <summary>The bench as a whole.</summary>
    public BenchDocument Snapshot()
    {
        lock (_gate)
        {
            return Document();
        }
    }

    /// <summary>The trace of its run so far.</summary>
    public TraceDocument Trace()
    {
        lock (_gate)
        {
            return _trace.Document(_run);
        }
    }

    private void Observe(Observed observed)
    {
        var seen = observed.Observation;
        _last = seen;
        var amps = seen.IsOverload ? double.NaN : seen.LineAmps;
        _trace.Append(seen.Seconds, amps);
        _newSeconds.Add(seen.Seconds);
        _newAmps.Add(amps);
        if (!seen.IsGap)
        {
            _lastReadingSeconds = seen.Seconds;
        }

        var blind = seen.Seconds - _lastReadingSeconds > BlindSeconds;
        var phase = observed.Phase.ToString().ToLowerInvariant();
        if (blind != _blind || phase != _phase)
        {
            (_blind, _phase, _changed) = (blind, phase, true);
        }

        if (!_moved || _changed)
        {
            // Only the first reading after each sending asks for the sentence: it is text made anew.
            _sentence = observed.Sentence();
        }

        _moved = true;
    }

    private void Wait(double amps)
    {
        _last = new Observation(0, amps);
        _blind = double.IsNaN(amps);
        _moved = true;
        if (_phase != "waiting")
        {
            Clear();
            (_phase, _changed) = ("waiting", true);
        }

        _sentence = _blind ? "Waiting for switch-on, but the meter gives no reading." : "Waiting for switch-on: the run begins when current flows.";
    }

    private void Rest(DeskChanged desk)
    {
        (_canStart, _canEnd) = (desk.CanStart, desk.CanEnd);
        if (desk.Idle && _phase != "ended")
        {
            Clear();
            (_phase, _sentence, _bringUp) = ("idle", "No soak: nobody watches this bench.", null);
        }
    }

    private void Begin(RunBegan began)
    {
        Take(began.Plan);
        Clear();
        (_run, _startedUtc, _phase, _sentence) = (began.Run, began.Utc, "settling", null);
    }

    private void Clear()
    {
        _findings.Clear();
        _alerts.Clear();
        _newSeconds.Clear();
        _newAmps.Clear();
        _trace = new LiveTrace();
        (_run, _startedUtc, _verdict, _reasons, _blind, _lastReadingSeconds) = (null, null, null, [], false, 0);
    }

    private void Take(BenchPlan plan)
    {
        if (!ReferenceEquals(plan, _plan))
        {
            (_plan, _instruments, _tree) = (plan, new BenchInstruments(plan), BankTree.Of(plan.Bank));
        }
    }

    private NowDocument Now() => _phase == "idle" && _idleAmps > _plan.SwitchedOnAmps
        ? _instruments.Now(null, _last, "Current flows, but no soak was started: nobody watches this unit.")
        : _instruments.Now(_run, _last, _sentence);

    private BenchDocument Document() => new(
        _plan.Name, _plan.Options.Mains, _plan.Bank.Text, _tree, _plan.Unit.Text, _plan.Options.UnitLabel, _phase, _blind, _sentence,
        _run, _startedUtc, _last.Seconds, _plan.PlannedSeconds, _plan.Prediction,
        [.. _findings.Values.Select(FindingEntry.Of)], [.. _alerts.Values], _verdict, _reasons, _bringUp, _canStart, _canEnd, Now());
}
