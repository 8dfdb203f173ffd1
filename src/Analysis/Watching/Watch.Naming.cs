namespace Lampwarden.Analysis.Watching;

/// <summary>What a sudden change is called, from the first reading on, and what is said about it.</summary>
public sealed partial class Watch
{
    private const double SwitchedOffSeconds = 300;

    private Signature Classify()
    {
        if (excursion.LongestOffSeconds > SwitchedOffSeconds)
        {
            // Minutes without current are no hiccup: somebody switched off, or it opened and was mended.
            return Signature.OpenCircuit;
        }

        if (excursion.LooksCycling)
        {
            return Signature.Cycling;
        }

        if (excursion.HasReturned || excursion.LooksLikeArcs)
        {
            return Signature.Intermittent;
        }

        var named = excursion.Number > 0 ? book[excursion.Number].Signature : Signature.Intermittent;
        return named is Signature.Intermittent or Signature.Cycling ? named : StepSignature(excursion.Step == 0 ? sudden.Jump : excursion.Step);
    }

    private void Rename(in Observation o, Signature signature)
    {
        var (sentence, evidence, severity) = (SuddenSentence(signature, o), Evidence(o), SeverityOf(signature, sudden.Jump));
        book.Amend(excursion.Number, old => old with { Signature = signature, Severity = severity, Explanation = sentence, Evidence = evidence });
    }

    /// <summary>Weighs what may have made the step that has stayed, and says it; where a lamp explains it, the prediction follows.</summary>
    private void Explain(in Observation o, double change)
    {
        var sd = Math.Sqrt((noise.WhiteSd * noise.WhiteSd / 10) + slow.Model.ForetoldVariance + 4e-6);
        var why = Hypotheses.Weigh(change, sd, expectation, settings.MainsMeasured);
        var signature = SignatureOf(why, change);
        var severity = why.Cause is Cause.LampLit or Cause.MainsMoved ? Severity.Notice : SeverityOf(signature, excursion.Step);
        var sentence = Advice.Step(change, o.LineAmps, Hypotheses.Sentence(why), Advice.LookFirst(why.Cause));
        var evidence = Evidence(o);
        evidence["likelierTimes"] = why.Times;
        if (why.Lamp is { } lamp)
        {
            evidence["lampPredictedAmps"] = why.Cause == Cause.LampDark ? lamp.AmpsWithout : lamp.AmpsWith;
            expectationBefore = expectation;
            expectation = expectation!.Scaled(Math.Exp(change), lamp);
        }

        book.Amend(excursion.Number, old => old with { Signature = signature, Severity = severity, Explanation = sentence, Evidence = evidence });
        if (severity == Severity.Notice)
        {
            book.Clear(excursion.Number, o.Seconds);
        }
    }

    private static Signature SignatureOf(in Explained why, double change) => why.Cause switch
    {
        Cause.LampDark or Cause.LampLit => Signature.LampOut,
        Cause.CircuitOpened => Signature.OpenCircuit,
        Cause.MainsMoved => Signature.MainsShift,
        Cause.UnitTakesLess => Signature.OffPrediction,
        _ => change > 0 ? Signature.HardShort : Signature.OffPrediction,
    };

    private static Signature StepSignature(double jump) =>
        jump > 0 ? Signature.HardShort : jump < Excursion.OffShare - 1 ? Signature.OpenCircuit : Signature.LampOut;

    private static Severity SeverityOf(Signature signature, double jump) =>
        signature == Signature.LampOut || (signature == Signature.HardShort && jump < 0.05) ? Severity.Warning : Severity.Critical;

    private string SuddenSentence(Signature signature, in Observation o)
    {
        var percent = (excursion.Step == 0 ? sudden.Jump : excursion.Step) * 100;
        return signature switch
        {
            Signature.HardShort => Advice.StepUp(percent, o.LineAmps),
            Signature.OpenCircuit => Advice.Open(o.LineAmps),
            Signature.LampOut => Advice.StepDown(-percent, o.LineAmps),
            Signature.DevelopingShort => Advice.Developing(WholeRise(o.LineAmps) * 100, excursion.ClimbPerSecond * 3600 * 100, o.LineAmps),
            Signature.Cycling => Advice.Cycling(excursion.Cycle.PeriodSeconds),
            _ => Advice.Intermittent(o.LineAmps),
        };
    }

    /// <summary>A climb shifts the model bit by bit; what counts for a reader is the whole rise since the unit was healthy.</summary>
    private double WholeRise(double amps) => amps / climbFromAmps - 1;

    private Dictionary<string, double> Evidence(in Observation o)
    {
        var evidence = new Dictionary<string, double>
        {
            ["lineAmps"] = o.LineAmps,
            ["expectedAmps"] = Math.Exp(slow.Foretell(o.Seconds, mains.Now)),
            ["changePercent"] = (excursion.Step == 0 ? sudden.Jump : excursion.Step) * 100,
        };
        if (excursion.Number > 0 && book[excursion.Number].Signature == Signature.DevelopingShort)
        {
            evidence["excessPercent"] = WholeRise(o.LineAmps) * 100;
        }

        if (excursion.Edges >= 2)
        {
            (evidence["periodSeconds"], evidence["dutyShare"]) = excursion.Cycle;
        }

        return evidence;
    }
}
