namespace Lampwarden.Analysis.Watching;

public sealed partial class Watch
{
    private const double GoneRatio = 2;
    private const double GoneSeconds = 900;

    private int riseFinding;
    private int fallFinding;
    private double goneSince = double.NaN;

    private void WeighSlow(in Observation o)
    {
        var cry = slow.Ask(o.Seconds);
        if (cry.Direction > 0 && !book.Stands(riseFinding))
        {
            riseFinding = book.Raise(RiseSignature(cry), Severity.Critical, cry.OnsetSeconds, o.Seconds, RiseSentence(cry, o), RiseEvidence(cry, o));
        }
        else if (cry.Direction < 0 && !book.Stands(fallFinding))
        {
            var lamp = cry.Shape == FaultShape.Step;
            fallFinding = book.Raise(
                lamp ? Signature.LampOut : Signature.OffPrediction,
                lamp ? Severity.Warning : Severity.Notice,
                cry.OnsetSeconds,
                o.Seconds,
                lamp ? Advice.StepDown(-cry.Excess * 100, o.LineAmps) : Advice.FallingSlowly(-cry.Excess * 100, o.LineAmps),
                RiseEvidence(cry, o));
        }
        else if (book.Stands(riseFinding))
        {
            Maintain(o, ref riseFinding, up: true);
        }
        else if (book.Stands(fallFinding))
        {
            Maintain(o, ref fallFinding, up: false);
        }
    }

    private void Maintain(in Observation o, ref int number, bool up)
    {
        var best = slow.Best(o.Seconds, up ? 1 : -1);
        if (best.Ratio > GoneRatio || (up && stepOffset > 0.01))
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

    // A growing fault and a straight one look much alike when first seen: the likelihoods differ by less than one. The cut is where on the
    // tuning corpora the two kinds of mistake cost the same.
    private const double GrowthLead = 0.15;
    private const double StepLead = 2;

    private static Signature RiseSignature(in SlowCry cry) =>
        cry.StepRatio > Math.Max(cry.RampRatio, cry.GrowthRatio) + StepLead ? Signature.HardShort
        : cry.GrowthRatio > cry.RampRatio + GrowthLead ? Signature.Runaway
        : Signature.DevelopingShort;

    private static string RiseSentence(in SlowCry cry, in Observation o) =>
        Advice.Developing(cry.Excess * 100, cry.Shape == FaultShape.Ramp ? cry.Size * 100 : double.NaN, o.LineAmps);

    private static Dictionary<string, double> RiseEvidence(in SlowCry cry, in Observation o) => new()
    {
        ["lineAmps"] = o.LineAmps,
        ["excessPercent"] = cry.Excess * 100,
        ["risePercentPerHour"] = cry.Shape == FaultShape.Ramp ? cry.Size * 100 : double.NaN,
        ["logLikelihoodRatio"] = cry.Ratio,
        ["growthOverRamp"] = cry.GrowthRatio - cry.RampRatio,
        ["stepOverRamp"] = cry.StepRatio - cry.RampRatio,
    };

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
    }
}
