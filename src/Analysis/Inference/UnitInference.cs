using System.Globalization;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Uncertainty;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Inference;

/// <summary>
/// From a line current and the mains to the unit's volts, watts and ohms (equations 10 to 13), with intervals from the lamps, the meter and
/// the mains. Made once for a bench; keeps scratch memory, so not thread-safe.
/// </summary>
public sealed class UnitInference
{
    // Beyond this relative standard uncertainty of the unit's volts its resistance is no number any more.
    private const double IllShare = 0.25;

    // A rectifier behind a bank takes at least about this share of what a resistor with the same current would (docs/model.md).
    private const double LeastRectifierShare = 0.5;

    private readonly Mains mains;
    private readonly Bank bank;
    private readonly PredictedMeter meter;
    private readonly double mainsMeasured;
    private readonly double mainsAssumed;
    private readonly BenchInputs inputs;
    private readonly BankCurves curves;

    /// <param name="mains">Nominal supply.</param>
    /// <param name="bank">The limiter.</param>
    /// <param name="meter">The line meter; its accuracy is taken as a rectangular bound.</param>
    /// <param name="mainsMeasured">Relative standard uncertainty of a measured mains voltage.</param>
    /// <param name="mainsAssumed">The same where it is only assumed.</param>
    public UnitInference(Mains mains, Bank bank, PredictedMeter meter, double mainsMeasured = 0.005, double mainsAssumed = 0.02)
    {
        (this.mains, this.bank, this.meter, this.mainsMeasured, this.mainsAssumed) = (mains, bank, meter, mainsMeasured, mainsAssumed);
        inputs = new BenchInputs(mains, bank, ResistorUnit.Short, new PredictionSettings());
        curves = new BankCurves(bank, inputs);
    }

    /// <summary>What a settled reading tells.</summary>
    /// <param name="lineAmps">True RMS line current, above 0.</param>
    /// <param name="mainsVolts">Measured mains of the same instant; NaN takes the nominal one, which is known less well.</param>
    /// <param name="nature">What kind of load the unit is.</param>
    /// <exception cref="ArgumentOutOfRangeException">The current is not above zero.</exception>
    public InferredUnit Infer(double lineAmps, double mainsVolts = double.NaN, UnitNature nature = UnitNature.Resistive)
    {
        if (!(lineAmps > 0 && double.IsFinite(lineAmps)))
        {
            throw new ArgumentOutOfRangeException(nameof(lineAmps), lineAmps, "A reading above zero is needed.");
        }

        var measured = !double.IsNaN(mainsVolts);
        var volts = measured ? mainsVolts : mains.Volts;
        var bound = meter.BoundAmps(lineAmps);
        var ampsInput = UncertainInput.Between("line current", lineAmps, lineAmps - bound, lineAmps + bound);
        var mainsInput = UncertainInput.Normal("mains voltage", volts, volts * (measured ? mainsMeasured : mainsAssumed));
        return Weigh(lineAmps, volts, ampsInput, mainsInput, nature);
    }

    private InferredUnit Weigh(double amps, double volts, in UncertainInput ampsInput, in UncertainInput mainsInput, UnitNature nature)
    {
        var bankVolts = curves.Volts(inputs.Nominal, amps);
        var nominal = Outputs(volts, bankVolts, amps);
        var spread = nominal.Select((value, index) => new Propagation(value, isLinear: index != Output.Bank)).ToArray();
        var logOhms = new Propagation(Math.Max(nominal[Output.Volts], 1e-9) / amps);
        Move(ampsInput, value => (volts, curves.Volts(inputs.Nominal, value), value));
        Move(mainsInput, value => (value, bankVolts, amps));
        for (var input = 0; input < inputs.Inputs.Count; input++)
        {
            if (input is 0 or 1 || inputs.Inputs[input].Sigma == 0 || inputs.IsTransientOnly(input))
            {
                continue;
            }

            var values = (double[])inputs.Nominal.Clone();
            Move(inputs.Inputs[input], value =>
            {
                values[input] = value;
                return (volts, curves.Volts(values, amps), amps);
            });
        }

        var ill = nominal[Output.Volts] <= 0 || spread[Output.Volts].Sigma > IllShare * nominal[Output.Volts];
        var (unitVolts, watts) = (Math.Max(0, nominal[Output.Volts]), Math.Max(0, nominal[Output.Watts]));
        var voltsInterval = spread[Output.Volts].Interval.Within(0, double.MaxValue);
        var wattsInterval = spread[Output.Watts].Interval.Within(0, double.MaxValue);
        var bankInterval = spread[Output.Bank].Interval;
        if (nature != UnitNature.Resistive)
        {
            // Volts lie between the sum in phase and the sum at right angles; real power below that of a resistor.
            var most = spread[Output.Quadrature].Interval;
            var least = nature == UnitNature.Rectifying ? LeastRectifierShare : 0;
            return new InferredUnit(
                bankVolts, bankInterval, double.NaN, new Interval(voltsInterval.Low, Math.Max(most.High, voltsInterval.High)),
                double.NaN, new Interval(least * wattsInterval.Low, wattsInterval.High),
                double.NaN, Interval.Unknown, double.NaN, ill, NatureNote(nature));
        }

        var ohmsInterval = ill ? Interval.Unknown : logOhms.Interval;
        return new InferredUnit(
            bankVolts, bankInterval, unitVolts, voltsInterval, watts, wattsInterval,
            ill ? double.NaN : unitVolts / amps, ohmsInterval, ill ? voltsInterval.High / amps : double.NaN, ill,
            ill ? IllNote(voltsInterval.High / amps) : null);

        void Move(in UncertainInput input, Func<double, (double Mains, double Bank, double Amps)> at)
        {
            var (mains1, bank1, amps1) = at(input.Mean + input.Sigma);
            var (mains0, bank0, amps0) = at(input.Mean - input.Sigma);
            var (above, below) = (Outputs(mains1, bank1, amps1), Outputs(mains0, bank0, amps0));
            for (var output = 0; output < spread.Length; output++)
            {
                spread[output].Add(input, above[output], below[output]);
            }

            logOhms.Add(input, Math.Max(above[Output.Volts], 1e-9) / amps1, Math.Max(below[Output.Volts], 1e-9) / amps0);
        }
    }

    private static double[] Outputs(double volts, double bankVolts, double amps) =>
        [bankVolts, volts - bankVolts, (volts - bankVolts) * amps, Math.Sqrt(Math.Max(0, volts * volts - bankVolts * bankVolts))];

    private string IllNote(double below) => string.Create(
        CultureInfo.InvariantCulture,
        $"Near a short the current hardly depends on the unit: it has less than {below:0.#} ohm, more cannot be said. A bigger bank, a calibrated one or a measured mains tells smaller resistances apart.")
        + CouplingNote();

    private string NatureNote(UnitNature nature) => (nature == UnitNature.Reactive
        ? "Out of phase with the mains, so one current gives bounds only: volts between the sum in phase and the sum at right angles."
        : "Peaky current: one reading gives bounds only; give the unit's kind and capacitor for a number by its model.") + CouplingNote();

    private string CouplingNote() => meter.Coupling == MeterCoupling.Ac
        ? " An AC-coupled meter does not see direct current: a half-wave short would read 0.77 of its true current and pass for a healthy load; AC+DC is the right setting."
        : "";

    private static class Output
    {
        public const int Bank = 0;
        public const int Volts = 1;
        public const int Watts = 2;
        public const int Quadrature = 3;
    }
}
