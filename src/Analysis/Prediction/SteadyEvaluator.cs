using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

/// <summary>
/// The steady state of a bench as a vector of numbers, for values of its inputs near the nominal ones: line current, bank volts, unit volts,
/// unit watts, power factor, then of each lamp volts, amperes, watts, kelvin and glow. Quick: the bank is solved exactly, the unit by its <see cref="LocalUnit"/>.
/// </summary>
internal sealed class SteadyEvaluator
{
    public const int Amps = 0;
    public const int BankVolts = 1;
    public const int UnitVolts = 2;
    public const int UnitWatts = 3;
    public const int PowerFactor = 4;
    public const int FirstLamp = 5;
    public const int PerLamp = 5;

    private readonly BenchInputs inputs;
    private readonly BankSolver solver;
    private readonly Bank bank;
    private readonly LocalUnit? local;
    private readonly double plainOhms;
    private readonly double sourceOhms;
    private readonly double nominalOhms;
    private readonly BankCurves curves;

    public SteadyEvaluator(
        Mains mains, Bank bank, Unit unit, UnitResponse response, in UnitPoint point, double bankOhms, double sourceOhms, BenchInputs inputs)
    {
        (this.bank, this.inputs, this.sourceOhms, nominalOhms, plainOhms) = (bank, inputs, sourceOhms, bankOhms, response.PlainOhms);
        curves = new BankCurves(bank, inputs);
        solver = curves.Prepare(inputs.Nominal);
        local = double.IsNaN(plainOhms)
            ? new LocalUnit(unit, mains, response, mains.Volts, bankOhms + sourceOhms, point, inputs.Inputs[1].Sigma > 0)
            : null;
    }

    /// <summary>How many numbers.</summary>
    public int Length => FirstLamp + PerLamp * bank.Lamps.Count;

    /// <summary>The numbers at these values of the inputs.</summary>
    public double[] At(ReadOnlySpan<double> values)
    {
        curves.Prepare(values);
        var lamps = inputs.LampsOf(values);
        var volts = inputs.MainsVolts(values);
        var rating = BenchInputs.UnitFactor(values);
        var point = local is null ? Plain(volts, plainOhms / rating) : Meet(volts, rating);
        var result = new double[Length];
        (result[Amps], result[BankVolts], result[UnitVolts], result[UnitWatts], result[PowerFactor]) =
            (point.Amps, solver.BankVolts, point.Volts, point.Watts, point.PowerFactor);
        for (var lamp = 0; lamp < lamps.Count; lamp++)
        {
            var (lampVolts, lampAmps, kelvin) = (solver.LampVolts[lamp], solver.LampAmps[lamp], solver.Kelvin(lamp));
            var at = FirstLamp + PerLamp * lamp;
            (result[at], result[at + 1], result[at + 2], result[at + 3], result[at + 4]) =
                (lampVolts, lampAmps, lampVolts * lampAmps, kelvin, lamps[lamp].Glow(kelvin));
        }

        return result;
    }

    private UnitPoint Plain(double volts, double ohms)
    {
        var amps = solver.Feed(volts, ohms + sourceOhms);
        return UnitPoint.Sinusoid(amps, amps * ohms, amps * amps * ohms);
    }

    // Secant steps on the bank's resistance from the nominal one: its own value at the current it lets through.
    private UnitPoint Meet(double volts, double rating)
    {
        var (x0, x1) = (Math.Log(nominalOhms), Math.Log(nominalOhms) + 0.01);
        var y0 = Excess(x0, out var point);
        for (var iteration = 0; iteration < 50 && Math.Abs(x1 - x0) > 1e-10; iteration++)
        {
            var y1 = Excess(x1, out point);
            var step = Math.Abs(y1 - y0) < 1e-15 ? 0 : Math.Clamp(-y1 * (x1 - x0) / (y1 - y0), -0.3, 0.3);
            (x0, y0, x1) = (x1, y1, x1 + step);
        }

        return point;

        double Excess(double logOhms, out UnitPoint at)
        {
            at = local!.At(volts, Math.Exp(logOhms) + sourceOhms, rating);
            return Math.Log(solver.Carry(at.Amps) / at.Amps) - logOhms;
        }
    }
}
