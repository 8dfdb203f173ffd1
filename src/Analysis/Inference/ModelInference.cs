using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Uncertainty;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Inference;

/// <summary>
/// The same question with the unit's kind known: its rating is moved until the model lets through the measured current, and volts and watts
/// are the model's. Good for rectifiers, switch-mode supplies, transformers and motors, where volts and amperes alone give bounds only.
/// </summary>
public sealed class ModelInference(Mains mains, Bank bank, Unit unit, PredictedMeter meter, double mainsMeasured = 0.005, double mainsAssumed = 0.02)
{
    private const double LeastFactor = 0.02;
    private const double MostFactor = 20;

    private readonly BenchInputs inputs = new(mains, bank, unit, new PredictionSettings { UnitUncertainty = 0 });

    /// <summary>What a settled reading tells; false where no rating of this kind of unit lets through this current.</summary>
    /// <param name="lineAmps">As the meter shows it.</param>
    /// <param name="mainsVolts">Measured mains; NaN takes the nominal one.</param>
    /// <param name="result">The answer.</param>
    /// <param name="ratingFactor">The unit's rating over its plate's.</param>
    public bool TryInfer(double lineAmps, double mainsVolts, out InferredUnit result, out double ratingFactor)
    {
        var measured = !double.IsNaN(mainsVolts);
        var volts = measured ? mainsVolts : mains.Volts;
        var curves = new BankCurves(bank, inputs);

        // What the meter shows of this waveform is taken from the nominal unit: it changes little with the rating.
        var solver = new SteadySolver(bank, unit.NewResponse(mains));
        var shown = solver.TrySolve(volts, out var nominal) ? MeterView.SettledShare(nominal, meter) : 1;
        var amps = lineAmps / shown;
        var bankVolts = curves.Volts(inputs.Nominal, amps);
        var ohms = bankVolts / amps;
        (result, ratingFactor) = (null!, double.NaN);
        if (!TryFindFactor(volts, ohms, amps, out ratingFactor))
        {
            return false;
        }

        var found = unit.Scaled(ratingFactor);
        var response = found.NewResponse(mains);
        var point = response.At(volts, ohms);
        var local = new LocalUnit(found, mains, response, volts, ohms, point, withRating: true);
        var bound = meter.BoundAmps(lineAmps) / shown;
        var spread = new Propagation[] { new(bankVolts), new(point.Volts), new(point.Watts) };
        Move(UncertainInput.Between("line current", amps, amps - bound, amps + bound), value => (volts, value, inputs.Nominal));
        Move(UncertainInput.Normal("mains voltage", volts, volts * (measured ? mainsMeasured : mainsAssumed)), value => (value, amps, inputs.Nominal));
        for (var input = 3; input < inputs.Inputs.Count; input++)
        {
            if (!inputs.IsTransientOnly(input))
            {
                var values = (double[])inputs.Nominal.Clone();
                var place = input;
                Move(inputs.Inputs[input], value =>
                {
                    values[place] = value;
                    return (volts, amps, values);
                });
            }
        }

        result = new InferredUnit(
            bankVolts, spread[0].Interval, point.Volts, spread[1].Interval, point.Watts, spread[2].Interval,
            double.NaN, Interval.Unknown, double.NaN, false, FormattableString.Invariant($"By the model of '{unit.Text}' at {ratingFactor:0.00} of its rating."));
        return true;

        void Move(in UncertainInput input, Func<double, (double Mains, double Amps, double[] Values)> at)
        {
            var above = Numbers(at(input.Mean + input.Sigma));
            var below = Numbers(at(input.Mean - input.Sigma));
            for (var output = 0; output < spread.Length; output++)
            {
                spread[output].Add(input, above[output], below[output]);
            }
        }

        double[] Numbers((double Mains, double Amps, double[] Values) at)
        {
            var carried = curves.Volts(at.Values, at.Amps);
            var rating = local.RatingOf(at.Mains, carried / at.Amps, at.Amps);
            var moved = local.At(at.Mains, carried / at.Amps, rating);
            return [carried, moved.Volts, moved.Watts];
        }
    }

    // The current grows with the rating.
    private bool TryFindFactor(double volts, double ohms, double amps, out double factor)
    {
        double Excess(double log) => Math.Log(amps / Math.Max(1e-12, unit.Scaled(Math.Exp(log)).NewResponse(mains).At(volts, ohms).Amps));
        var (low, high) = (Math.Log(LeastFactor), Math.Log(MostFactor));
        var (lowExcess, highExcess) = (Excess(low), Excess(high));
        factor = double.NaN;
        if (lowExcess <= 0 || highExcess >= 0)
        {
            return false;
        }

        var bracket = new Bracket(low, lowExcess, high, highExcess);
        for (var iteration = 0; iteration < 60 && bracket.Width > 1e-8; iteration++)
        {
            var middle = bracket.Next;
            factor = Math.Exp(middle);
            var excess = Excess(middle);
            if (Math.Abs(excess) < 1e-8)
            {
                break;
            }

            bracket.Take(middle, excess);
        }

        return true;
    }
}
