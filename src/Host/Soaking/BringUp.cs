using System.Globalization;
using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Soaking;

/// <summary>One step of a bring-up: a bank with fewer lamps than the last, and what it should show.</summary>
/// <param name="Plan">The bench with that bank.</param>
/// <param name="Adds">What is switched in at this step.</param>
/// <param name="ExpectLowAmps">Lower end of what a healthy unit shows.</param>
/// <param name="ExpectHighAmps">Upper end.</param>
/// <param name="StopAboveAmps">Above this the mains is to be switched off.</param>
/// <param name="Why">What the step is good for.</param>
public sealed record BringUpStep(BenchPlan Plan, string Adds, double ExpectLowAmps, double ExpectHighAmps, double StopAboveAmps, string Why)
{
    /// <summary>The bank as text.</summary>
    public string Bank => Plan.Bank.Text;

    internal double MiddleAmps => Plan.Prediction.Steady.LineAmps;
}

/// <summary>Where a bring-up stands.</summary>
/// <param name="Steps">All of them.</param>
/// <param name="At">The step that holds, counted from 0.</param>
/// <param name="State">waiting, ready, moving, stop or over.</param>
/// <param name="Sentence">What is seen and what to do now.</param>
public sealed record BringUpStatus(IReadOnlyList<BringUpStep> Steps, int At, string State, string Sentence)
{
    /// <summary>Nothing is left to switch in.</summary>
    public bool Over => State == "over";
}

/// <summary>What changed.</summary>
/// <param name="Announcement">For the watch; null where nothing was switched.</param>
/// <param name="Note">For the record; null where there is nothing to say.</param>
public sealed record BringUpMove(Announcement? Announcement, string? Note);

/// <summary>
/// Follows a bring-up by the current alone: a lamp that is switched in moves the current by a share that the prediction
/// names. Not thread-safe: owned by the soak's loop. Time enters with the observations.
/// </summary>
/// <param name="steps">From the first lamps to the whole bank.</param>
/// <param name="at">The step that is in already, where a bring-up is taken up again.</param>
public sealed class BringUp(IReadOnlyList<BringUpStep> steps, int at = 0)
{
    // Filaments and unit have come to rest by then: half a dozen of the longest settling times that lamps in series show.
    private const double HoldSeconds = 3;

    // A cold lamp that joins takes more than its share for as long as it warms.
    private const double InrushSeconds = 1.5;

    // A change below this share cannot be told from the mains' own wander.
    private const double LeastShare = 0.03;

    private int _at = at;
    private string _state = at == 0 ? "waiting" : "moving";
    private double _movedSeconds = double.NaN;
    private double _aboveSinceSeconds = double.NaN;
    private double _baselineAmps = double.NaN;
    private double _beforeAmps = double.NaN;
    private string? _said;

    /// <summary>A bring-up that was left off at a bank, taken up again there.</summary>
    /// <returns>Null where no step has that bank: the lamps or the plan are others now.</returns>
    public static BringUp? TakeUp(IReadOnlyList<BringUpStep> steps, string bank)
    {
        var at = Enumerable.Range(0, steps.Count).FirstOrDefault(step => steps[step].Bank == bank, -1);
        return at < 0 ? null : new BringUp(steps, at);
    }

    /// <summary>The bench as it is at this step.</summary>
    public BenchPlan Plan => steps[_at].Plan;

    /// <summary>Where it stands.</summary>
    public BringUpStatus Status => new(steps, _at, _state, Sentence());

    private bool HasNext => _at + 1 < steps.Count;

    private double NextShare => HasNext ? Math.Log(steps[_at + 1].MiddleAmps / steps[_at].MiddleAmps) : double.NaN;

    /// <summary>Takes one observation before the watch weighs it.</summary>
    /// <returns>What changed; null for nothing.</returns>
    public BringUpMove? Take(in Observation seen)
    {
        if (_state is "over" || seen.IsGap)
        {
            return null;
        }

        var before = (_at, _state);
        var move = seen.IsOverload ? Above(seen.Seconds) : Weigh(seen);
        if (move is null && (_at, _state) == before && Sentence() == _said)
        {
            return null;
        }

        _said = Sentence();
        return move ?? new BringUpMove(null, null);
    }

    /// <summary>A person says that the next lamp is in.</summary>
    /// <returns>Null where there is no next one.</returns>
    public BringUpMove? Confirm(double seconds) => HasNext && _state != "over"
        ? Switched(seconds, "said to be in")
        : null;

    /// <summary>A person leaves the bring-up where it is.</summary>
    public BringUpMove? Leave()
    {
        if (_state == "over")
        {
            return null;
        }

        _state = "over";
        return new BringUpMove(null, $"Bring-up left at {steps[_at].Bank}.");
    }

    private BringUpMove? Weigh(in Observation seen)
    {
        var amps = seen.LineAmps;
        if (double.IsNaN(_movedSeconds))
        {
            _movedSeconds = seen.Seconds;
        }

        var sinceMove = seen.Seconds - _movedSeconds;
        if (amps > steps[_at].StopAboveAmps && sinceMove > InrushSeconds && !(HasNext && IsNextLamp(amps)))
        {
            return Above(seen.Seconds);
        }

        _aboveSinceSeconds = double.NaN;
        if (_state == "stop")
        {
            _state = "waiting";
            _movedSeconds = seen.Seconds;
        }

        if (_state is "waiting" or "moving")
        {
            return sinceMove >= HoldSeconds ? Hold(amps) : null;
        }

        if (HasNext && IsNextLamp(amps))
        {
            return Switched(seen.Seconds, "recognised by the current");
        }

        _baselineAmps += (amps - _baselineAmps) * 0.2;
        return null;
    }

    private BringUpMove? Hold(double amps)
    {
        var step = steps[_at];
        // The first step is held against the prediction; later ones against what the step before really drew.
        var fits = double.IsNaN(_beforeAmps)
            ? amps >= step.ExpectLowAmps && amps <= step.ExpectHighAmps
            : Math.Abs(Math.Log(amps / _beforeAmps) - Math.Log(step.MiddleAmps / steps[_at - 1].MiddleAmps)) < 0.1
                || (amps >= step.ExpectLowAmps && amps <= step.ExpectHighAmps);
        if (!fits)
        {
            return null;
        }

        _baselineAmps = amps;
        _state = HasNext ? "ready" : "over";
        return new BringUpMove(null, string.Create(CultureInfo.InvariantCulture, $"Bring-up: {step.Bank} holds at {Narration.Amps(amps)}."));
    }

    private bool IsNextLamp(double amps)
    {
        if (_state != "ready" || Math.Abs(NextShare) < LeastShare)
        {
            return false;
        }

        // Half of the share that is due: a lamp still warming shows more, a mains dip never so much.
        var share = Math.Log(amps / _baselineAmps) / NextShare;
        return share > 0.5 && amps <= steps[_at + 1].StopAboveAmps;
    }

    private BringUpMove Switched(double seconds, string how)
    {
        _beforeAmps = _baselineAmps;
        _at++;
        (_state, _movedSeconds, _aboveSinceSeconds) = ("moving", seconds, double.NaN);
        return new BringUpMove(
            new Announcement(AnnouncementKind.LampSwitched, steps[_at].Bank, steps[_at].Plan.WatchSettings.Expectation),
            $"Bring-up: {steps[_at].Bank}, {how}.");
    }

    private BringUpMove? Above(double seconds)
    {
        _aboveSinceSeconds = double.IsNaN(_aboveSinceSeconds) ? seconds : _aboveSinceSeconds;
        if (seconds - _aboveSinceSeconds < InrushSeconds || _state == "stop")
        {
            return null;
        }

        _state = "stop";
        return new BringUpMove(null, $"Bring-up: the current at {steps[_at].Bank} is above where it should be stopped.");
    }

    private string Sentence() => _state switch
    {
        "waiting" => $"Begin with {steps[_at].Bank} alone and switch the mains on: expect {Band(steps[_at])}.",
        "moving" => $"{steps[_at].Adds} is in: waiting for {Band(steps[_at])}.",
        "stop" => $"Switch the mains off: more than {Narration.Amps(steps[_at].StopAboveAmps)} through {steps[_at].Bank}.",
        "ready" when Math.Abs(NextShare) < LeastShare =>
            $"{steps[_at].Bank} holds. Switch in {steps[_at + 1].Adds}; the current will hardly show it, so say when it is in.",
        "ready" => $"{steps[_at].Bank} holds. Switch in {steps[_at + 1].Adds}: expect {Band(steps[_at + 1])}.",
        _ => $"{steps[_at].Bank} holds: the bring-up is done.",
    };

    private static string Band(BringUpStep step) => $"{Narration.Amps(step.ExpectLowAmps)} to {Narration.Amps(step.ExpectHighAmps)}";
}
