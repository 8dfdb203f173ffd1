namespace Lampwarden.Analysis.Watching;

public sealed partial class Watch
{
    private const double GoneRatio = 2;
    private const double GoneSeconds = 900;

    // Without a prediction: what calls for a look and what calls for the switch, as excess over the healthy current.
    private const double WarningExcess = 0.10, StopExcess = 0.25;
    private const double UrgentExcess = 0.08, UrgentSeconds = 3600;
    private const double AmendEverySeconds = 900, AmendGrowth = 1.5, ClimbToldSeconds = 60;

    // A growing fault and a straight one look much alike when first seen: the likelihoods differ by less than one. The cut is where on the
    // tuning corpora the two kinds of mistake cost the same.
    private const double GrowthLead = 0.15;
    private const double StepLead = 2;

    private int riseFinding;
    private int fallFinding;
    private double goneSince = double.NaN;
    private double climbFromAmps = double.NaN;
    private double amendedSeconds;
    private double amendedExcess;

    private void WeighSlow(in Observation o)
    {
        var cry = slow.Ask(o.Seconds);
        if (cry.Direction > 0 && !book.Stands(riseFinding))
        {
            var (signature, severity, sentence, evidence) = Rise(cry, o);
            riseFinding = book.Raise(signature, severity, cry.OnsetSeconds, o.Seconds, sentence, evidence);
        }
        else if (cry.Direction < 0 && !book.Stands(fallFinding))
        {
            RaiseFall(cry, o);
        }
        else if (book.Stands(riseFinding))
        {
            MaintainRise(o);
        }
        else if (book.Stands(fallFinding))
        {
            ClearIfGone(slow.Best(o.Seconds, -1), o, ref fallFinding);
        }
    }

    private void RaiseFall(in SlowCry cry, in Observation o)
    {
        Dictionary<string, double> evidence = new() { ["lineAmps"] = o.LineAmps, ["excessPercent"] = cry.Excess * 100, ["logLikelihoodRatio"] = cry.Ratio };
        if (cry.Shape != FaultShape.Step)
        {
            var sentence = Advice.FallingSlowly(-cry.Excess * 100, o.LineAmps);
            fallFinding = book.Raise(Signature.OffPrediction, Severity.Notice, cry.OnsetSeconds, o.Seconds, sentence, evidence);
            return;
        }

        // A step too small for the sudden channel: the same causes compete for it.
        var why = Hypotheses.Weigh(cry.Size, cry.SizeSd, expectation, settings.MainsMeasured);
        evidence["likelierTimes"] = why.Times;
        var explanation = Advice.Step(cry.Size, o.LineAmps, Hypotheses.Sentence(why), Advice.LookFirst(why.Cause));
        fallFinding = book.Raise(SignatureOf(why, cry.Size), Severity.Warning, cry.OnsetSeconds, o.Seconds, explanation, evidence);
    }

    private void MaintainRise(in Observation o)
    {
        var best = slow.Best(o.Seconds, 1);
        var signature = book[riseFinding].Signature;
        if (signature is Signature.DevelopingShort or Signature.Runaway && best.Ratio > GoneRatio && stepOffset == 0)
        {
            // Renamed only while the alarm is young, or when the evidence for the other shape has become strong.
            var young = o.Seconds - book[riseFinding].RaisedSeconds < 60;
            var renamed = RiseSignature(best) != signature && (young || Math.Abs(best.GrowthRatio - best.RampRatio) > 3);
            if (renamed || best.Excess > AmendGrowth * amendedExcess || o.Seconds - amendedSeconds > AmendEverySeconds)
            {
                var (named, severity, sentence, evidence) = Rise(best, o);
                book.Amend(riseFinding, old => old with
                {
                    Signature = renamed ? named : old.Signature,
                    Severity = severity > old.Severity ? severity : old.Severity,
                    Explanation = sentence,
                    Evidence = evidence,
                });
            }
        }

        if (stepOffset <= 0.01)
        {
            ClearIfGone(best, o, ref riseFinding);
        }
        else if (climbFromAmps > 0 && o.Seconds - amendedSeconds > ClimbToldSeconds)
        {
            AmendClimbed(o);
        }
    }

    /// <summary>A climb that the model was shifted to follow goes on being told by where the line stands now.</summary>
    private void AmendClimbed(in Observation o)
    {
        amendedSeconds = o.Seconds;
        var percent = WholeRise(o.LineAmps) * 100;
        var amps = o.LineAmps;
        book.Amend(riseFinding, old => old with
        {
            Explanation = Advice.Developing(percent, double.NaN, amps),
            Evidence = new Dictionary<string, double>(old.Evidence) { ["lineAmps"] = amps, ["excessPercent"] = percent },
        });
    }

    private void ClearIfGone(in SlowCry best, in Observation o, ref int number)
    {
        if (best.Ratio > GoneRatio)
        {
            goneSince = double.NaN;
            return;
        }

        goneSince = double.IsNaN(goneSince) ? o.Seconds : goneSince;
        if (o.Seconds - goneSince > GoneSeconds)
        {
            book.Clear(number, o.Seconds);
            number = 0;
            goneSince = double.NaN;
        }
    }

    private static Signature RiseSignature(in SlowCry cry) =>
        cry.StepRatio > Math.Max(cry.RampRatio, cry.GrowthRatio) + StepLead ? Signature.HardShort
        : cry.GrowthRatio > cry.RampRatio + GrowthLead ? Signature.Runaway
        : Signature.DevelopingShort;

    private (Signature Signature, Severity Severity, string Sentence, Dictionary<string, double> Evidence) Rise(in SlowCry cry, in Observation o)
    {
        (amendedSeconds, amendedExcess) = (o.Seconds, cry.Excess);
        var signature = RiseSignature(cry);
        var healthy = o.LineAmps / (1 + Math.Max(cry.Excess, 0));
        var warning = Target(expectation?.BandHighAmps, healthy, WarningExcess);
        var stop = Math.Max(Target(expectation?.ShortedAmps * 0.9, healthy, StopExcess), warning * 1.2);
        var toWarning = slow.ForetellExcess(o.Seconds, Unbent(healthy, warning));
        var toStop = slow.ForetellExcess(o.Seconds, Unbent(healthy, stop));
        var perHour = cry.Shape == FaultShape.Ramp ? cry.Size
            : cry.Shape == FaultShape.Step ? double.NaN
            : (FaultScores.Unit(cry.Shape, o.Seconds + 360 - cry.OnsetSeconds) - FaultScores.Unit(cry.Shape, o.Seconds - cry.OnsetSeconds)) * cry.Size * 10;
        var severity = cry.Excess > UrgentExcess || toStop.MiddleSeconds < UrgentSeconds ? Severity.Critical : Severity.Warning;
        return (signature, severity, Advice.Rising(signature, cry.Excess * 100, perHour * 100, o.LineAmps, healthy * (1 + warning), toWarning), new()
        {
            ["lineAmps"] = o.LineAmps,
            ["healthyAmps"] = healthy,
            ["excessPercent"] = cry.Excess * 100,
            ["risePercentPerHour"] = perHour * 100,
            ["sizeSdShare"] = cry.SizeSd / cry.Size,
            ["logLikelihoodRatio"] = cry.Ratio,
            ["growthOverRamp"] = cry.GrowthRatio - cry.RampRatio,
            ["warningAmps"] = healthy * (1 + warning),
            ["warningInSeconds"] = Finite(toWarning.MiddleSeconds),
            ["warningInLowSeconds"] = Finite(toWarning.LowSeconds),
            ["warningInHighSeconds"] = Finite(toWarning.HighSeconds),
            ["stopAmps"] = healthy * (1 + stop),
            ["stopInSeconds"] = Finite(toStop.MiddleSeconds),
            ["stopInLowSeconds"] = Finite(toStop.LowSeconds),
            ["stopInHighSeconds"] = Finite(toStop.HighSeconds),
        });
    }

    /// <summary>
    /// The bank bends the way up: the nearer the line is to the bank's shorted current, the more the unit's load must grow for the same rise.
    /// With x the line over the shorted current the unit takes x / (1 - x^b) of load, b the inverse of the bank's exponent. Gives the excess
    /// that would be reached by the time of <paramref name="excess"/> if the beginning of the rise went on straight.
    /// </summary>
    private double Unbent(double healthyAmps, double excess)
    {
        if (expectation is not { ShortedAmps: > 0 } expected || !(healthyAmps < 0.9 * expected.ShortedAmps))
        {
            return excess;
        }

        var (b, x0) = (1 / expected.BankExponent, healthyAmps / expected.ShortedAmps);
        var x = Math.Min(x0 * (1 + excess), 0.97);
        var bank0 = Math.Pow(x0, b);
        var grown = x / (1 - Math.Pow(x, b)) / (x0 / (1 - bank0)) - 1;
        return grown / (1 + (b * bank0 / (1 - bank0)));
    }

    private static double Target(double? amps, double healthy, double otherwise) =>
        amps / healthy - 1 is { } share and > 0.02 ? share : otherwise;

    private static double Finite(double value) => double.IsFinite(value) ? value : double.NaN;

    private void Forgive(double seconds)
    {
        ClearIfStanding(ref stepFinding, seconds);
        ClearIfStanding(ref burstFinding, seconds);
        ClearIfStanding(ref riseFinding, seconds);
        ClearIfStanding(ref fallFinding, seconds);
        stepOffset = 0;
        bursts = 0;
    }

    private void ClearIfStanding(ref int number, double seconds)
    {
        if (book.Stands(number))
        {
            book.Clear(number, seconds);
        }

        number = 0;
    }

    private void TransferSlow(StateStream state)
    {
        state.Field(ref riseFinding);
        state.Field(ref fallFinding);
        state.Field(ref goneSince);
        state.Field(ref amendedSeconds);
        state.Field(ref climbFromAmps);
        state.Field(ref amendedExcess);
    }
}
