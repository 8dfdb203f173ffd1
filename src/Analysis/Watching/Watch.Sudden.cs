namespace Lampwarden.Analysis.Watching;

public sealed partial class Watch
{
    private const double LeastSd = 0.003;

    // Real meters scatter with heavier tails than a normal: the sd is taken 15 % larger.
    private const double HeavyTails = 1.32;
    private const double TrendIgnored = 0.008;
    private const double LoadWarmUpSd = 0.05;
    private const double SwitchWarmUpSd = 0.02;
    private const double AnnouncedGraceSeconds = 60;
    private const double QuietSeconds = 90;
    private const double BurstStaysSeconds = 60;
    private const double FreshJump = 0.3;
    private const double RelearnPauseSeconds = 5;
    private const double BurstMemorySeconds = 1800;

    // Without a mains reading a dip of the mains is a dip of the current: smaller steps must outlast it, and a tap change is none of the unit's business.
    private const double DipShare = 0.2, DipSeconds = 90, TapShare = 0.022;

    // After so long without a mains reading the watch goes on by the last one, rather than not at all.
    private const double SilentMainsSeconds = 15, LongSilentMainsSeconds = 600;

    // By so much it may have moved meanwhile.
    private const double SilentMainsShare = 0.02;

    // A dip of the mains is waited out so long before its level is taken for the present one.
    private const double FarMainsSeconds = 60;

    private int stepFinding;
    private double stepOffset;
    private int burstFinding;
    private double lastBurstSeconds;
    private int bursts;
    private int mainsFinding;
    private bool farMainsLearned;
    private bool isReturn;
    private bool excursionJoins;
    private int nextEdges = 4;

    private void WeighReading(in Observation o)
    {
        var seconds = o.Seconds;
        var log = Math.Log(Math.Max(o.LineAmps, 1e-6));
        if (!slow.Started || slow.AgeSeconds(seconds) < 3 * SlowChannel.BlockSeconds)
        {
            slow.Add(seconds, log, mains.Filtered, noise.WhiteSd, mains.NoiseVariance);
            return;
        }

        if (FollowCycle(o, log))
        {
            return;
        }

        log -= cycle.Offset;
        var model = slow.Model;
        var foretold = slow.Foretell(seconds, mains.Now);
        var sd = Math.Sqrt(Math.Max(HeavyTails * noise.WhiteSd * noise.WhiteSd, LeastSd * LeastSd) + model.ForetoldVariance + (seconds < gapForgottenSeconds ? gapVariance : 0));
        var exponentSd = Math.Sqrt(model.ExponentVariance);
        exponentSd = IsFreshMains ? Math.Max(exponentSd, SlowChannel.FarExponentSd) : exponentSd;
        var extra = (0.15 * Math.Max(0, mains.Unrest - 0.008)) + (2 * exponentSd * Math.Max(mains.Unrest, Math.Abs(mains.Departure)));
        extra += mains.SilentSeconds > SilentMainsSeconds ? SilentMainsShare * Math.Abs(model.Exponent) : 0;
        var trendNow = trend.At(seconds);
        var offset = double.IsNaN(trendNow) ? 0 : trendNow - Math.Clamp(trendNow, -TrendIgnored, TrendIgnored);
        WatchStuck(o, Math.Exp(foretold + cycle.Offset));
        var cry = sudden.Observe(seconds, o.LineAmps, Math.Exp(foretold + cycle.Offset), excursion.Active ? 0 : offset, sd, extra, noise.Pole, noise.PoleDoubtful || !settings.MainsMeasured);
        if (excursion.Active)
        {
            // Filter undone, the unit may be back while the meter's own filter still climbs: such a reading teaches nothing.
            if (FollowExcursion(o, sd, IsFreshMains ? extra : 0) && Math.Abs(log - slow.Foretell(seconds, mains.Filtered)) < 4 * sd
                && !IsFreshMains && slow.Add(seconds, log, mains.Filtered, noise.WhiteSd, mains.NoiseVariance))
            {
                WeighSlow(o);
            }
        }
        else if (cry != SuddenCry.Nothing)
        {
            BeginExcursion(o, cry, sd);
        }
        else if (!sudden.InDoubt)
        {
            trend.Follow(seconds, sudden.Jump + offset, 3 * sd);
            Accept(o, log);
        }

        ForgetBursts(seconds);
    }

    private bool IsFreshMains => mains.AwaySeconds is > 0 and < FarMainsSeconds;

    /// <summary>Learns from a reading that is not in doubt.</summary>
    private void Accept(in Observation o, double log)
    {
        if (IsFreshMains || mains.SilentSeconds is > SilentMainsSeconds and < LongSilentMainsSeconds)
        {
            // A dip: the two meters do not read at one instant, and what so far a move does to the current is not known well. Or a mains meter
            // that says nothing for a while: what the mains does meanwhile would be laid on the unit.
            slow.DropBlock();
            return;
        }

        noise.Learn(log - slow.Foretell(o.Seconds, mains.Filtered), o.LineAmps);
        if (slow.Add(o.Seconds, log, mains.Filtered, noise.WhiteSd, mains.NoiseVariance))
        {
            WeighSlow(o);
        }
    }

    private void BeginExcursion(in Observation o, SuddenCry cry, double sd)
    {
        slow.DropBlock();
        if (o.Seconds - announcedSeconds < AnnouncedGraceSeconds)
        {
            Relearn(o.Seconds, LoadWarmUpSd);
            return;
        }

        var onset = cry == SuddenCry.Up ? sudden.OnsetUpSeconds : cry == SuddenCry.Down ? sudden.OnsetDownSeconds : o.Seconds;
        excursionJoins = false;
        nextEdges = 4;
        excursion.Begin(onset, o.Seconds, sudden.Jump, sd);
        isReturn = stepOffset != 0 && Math.Abs(Math.Log(Math.Max(1 + sudden.Jump, 0.01)) + stepOffset) < 0.3 * Math.Abs(stepOffset);
        // A mains reading from before the change says nothing about it: a slower mains meter shows a dip when the current has long followed it.
        var mayBeMains = Math.Abs(sudden.Jump) < DipShare && (!settings.MainsMeasured || (settings.MainsIsSlower && cry != SuddenCry.Burst && mains.ChangedSeconds <= onset));
        if (!isReturn && !mayBeMains)
        {
            RaiseExcursion(o, cry == SuddenCry.Burst ? Signature.Intermittent : StepSignature(sudden.Jump));
        }
    }

    /// <summary>Learns a new level, after a pause in which the change and the meter's filter run out.</summary>
    private void Relearn(double seconds, double warmSd)
    {
        holdUntilSeconds = seconds + RelearnPauseSeconds;
        excursion.End();
        sudden.Reset();
        trend.Restart();
        noise.Skip();
        slow.Restart(warmSd);
        cycle.Restart();
    }

    private void RaiseExcursion(in Observation o, Signature signature)
    {
        if (book.Stands(burstFinding))
        {
            excursion.Number = burstFinding;
            return;
        }

        excursionJoins = book.Stands(riseFinding) && signature == Signature.HardShort && sudden.Jump < FreshJump;
        if (excursionJoins)
        {
            excursion.Number = riseFinding;
            return;
        }

        if (limits.ShortedStands && signature == Signature.HardShort)
        {
            return;
        }

        excursion.Number = book.Raise(signature, SeverityOf(signature, sudden.Jump), excursion.OnsetSeconds, o.Seconds, SuddenSentence(signature, o), Evidence(o));
    }

    /// <summary>Takes one reading of an excursion; true if it may be learned from.</summary>
    /// <param name="allowed">How far it may be off for the sake of a mains that has just moved, relative.</param>
    private bool FollowExcursion(in Observation o, double sd, double allowed)
    {
        var left = Math.Max(0, Math.Abs(sudden.Jump) - allowed) * Math.Sign(sudden.Jump);
        var healthy = excursion.Follow(o.Seconds, left);
        if (excursion.Climbs && !isReturn)
        {
            ConfirmClimb(o);
            return false;
        }

        var signature = Classify();
        if (excursion.Number == 0 && !isReturn && signature == Signature.Intermittent && excursion.LooksLikeArcs)
        {
            RaiseExcursion(o, signature);
        }

        if (excursion.Number > 0 && !excursionJoins && (signature != book[excursion.Number].Signature || excursion.Edges >= nextEdges))
        {
            // The period is told anew each time twice as many goings and comings have been seen.
            nextEdges = Math.Max(nextEdges, 2) * (excursion.Edges >= nextEdges ? 2 : 1);
            Rename(o, signature);
        }

        var patience = excursion.HasReturned ? BurstStaysSeconds
            : settings.MainsMeasured || Math.Abs(excursion.Step) >= DipShare ? Excursion.ResolveSeconds : DipSeconds;
        if (!healthy && !excursion.IsOff && excursion.Stays(o.Seconds, patience))
        {
            ConfirmStep(o);
        }
        else if (o.Seconds - excursion.LastOutSeconds > QuietSeconds)
        {
            EndExcursion(o);
        }

        return healthy;
    }

    private void ConfirmStep(in Observation o)
    {
        var step = excursion.Step;
        var by = Math.Log(Math.Max(1 + step, 0.01));
        var tap = !settings.MainsMeasured && Math.Abs(step) < TapShare && excursion.Number == 0;
        if (isReturn)
        {
            RememberReturn(o);
            (expectation, expectationBefore) = (expectationBefore ?? expectation, null);
            ClearIfStanding(ref stepFinding, o.Seconds);
            ClearIfStanding(ref riseFinding, o.Seconds);
            stepOffset = 0;
        }
        else if (!tap)
        {
            if (excursion.Number == 0)
            {
                RaiseExcursion(o, StepSignature(step));
            }

            if (excursion.Number > 0 && !excursionJoins && !excursion.HasReturned)
            {
                Explain(o, by);
                stepFinding = excursion.Number;
                RememberLeaving(excursion.OnsetSeconds, by, stepFinding);
            }

            stepOffset += by;
        }

        excursion.End();
        sudden.Reset();
        trend.Restart();
        slow.ShiftLevel(by);
    }

    /// <summary>No step but a climb too fast for blocks: it joins or becomes the standing rise, and the trend is told so as not to cry again.</summary>
    private void ConfirmClimb(in Observation o)
    {
        if (stepOffset == 0 || !book.Stands(riseFinding))
        {
            climbFromAmps = Math.Exp(slow.Foretell(o.Seconds, mains.Filtered));
        }

        if (excursion.Number == 0 && !book.Stands(riseFinding))
        {
            RaiseExcursion(o, Signature.DevelopingShort);
        }
        else if (excursion.Number > 0)
        {
            Rename(o, Signature.DevelopingShort);
        }

        riseFinding = excursion.Number > 0 ? excursion.Number : riseFinding;
        amendedSeconds = o.Seconds;

        var (latest, slope, by) = (excursion.Latest, excursion.ClimbPerSecond, Math.Log(1 + excursion.Latest));
        excursion.End();
        sudden.Reset();
        trend.Restart();
        trend.Begin(o.Seconds, 0, slope / (1 + latest));
        stepOffset += by;
        slow.ShiftLevel(by);
    }

    private void EndExcursion(in Observation o)
    {
        if (excursion.Number > 0)
        {
            burstFinding = excursion.Number;
            lastBurstSeconds = excursion.LastOutSeconds;
            bursts++;
            Rename(o, book[burstFinding].Signature);
        }
        else if (!isReturn && !settings.MainsMeasured && !book.Stands(riseFinding))
        {
            book.Raise(Signature.MainsShift, Severity.Notice, excursion.OnsetSeconds, o.Seconds, Advice.DipUnmeasured, Evidence(o));
            book.Clear(book.All.Count, o.Seconds);
        }

        excursion.End();
        sudden.Reset();
        trend.Restart();
    }

    private void ForgetBursts(double seconds)
    {
        if (burstFinding > 0 && !excursion.Active && seconds - lastBurstSeconds > BurstMemorySeconds)
        {
            book.Clear(burstFinding, seconds);
            burstFinding = bursts = 0;
        }
    }

    private void WatchMains(double seconds)
    {
        if (!farMainsLearned && mains.AwaySeconds >= FarMainsSeconds)
        {
            slow.LearnFarMains();
            if (excursion.Active && excursion.Number == 0)
            {
                // What was taken for a change may be what the mains does to this unit: now it is learned.
                excursion.End();
                sudden.Reset();
                trend.Restart();
            }
        }

        farMainsLearned = mains.AwaySeconds >= FarMainsSeconds;
        if (mains.AwayInARow == 2 && !book.Stands(mainsFinding))
        {
            var percent = (Math.Exp(mains.Departure) - 1) * 100;
            mainsFinding = book.Raise(Signature.MainsShift, Severity.Notice, seconds, seconds, Advice.Mains(percent), new()
            {
                ["mainsChangePercent"] = percent,
                ["mainsVolts"] = settings.NominalMainsVolts * Math.Exp(mains.Now),
            });
        }
        else if (mains.AwayInARow == 0 && book.Stands(mainsFinding))
        {
            book.Clear(mainsFinding, seconds);
        }
    }

    private void TransferSudden(StateStream state)
    {
        state.Field(ref stepFinding);
        state.Field(ref stepOffset);
        state.Field(ref burstFinding);
        state.Field(ref lastBurstSeconds);
        state.Field(ref bursts);
        state.Field(ref mainsFinding);
        state.Field(ref farMainsLearned);
        state.Field(ref isReturn);
        state.Field(ref excursionJoins);
        state.Field(ref nextEdges);
    }
}
