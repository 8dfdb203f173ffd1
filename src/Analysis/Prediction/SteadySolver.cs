using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

/// <summary>
/// The steady operating point of a bank and a unit as RMS values: the bank's resistance at the current it carries must be the one that
/// the unit sees. Allocates nothing after construction; starts from its last answer; not thread-safe.
/// </summary>
internal sealed class SteadySolver
{
    private const int MostIterations = 200;
    private const double Tolerance = 1e-9;

    private readonly UnitResponse unit;
    private readonly double sourceOhms;
    private readonly ConstantPowerSolver? constantPower;

    public SteadySolver(Bank bank, UnitResponse unit, double sourceOhms = 0)
    {
        Bank = new BankSolver(bank);
        (this.unit, this.sourceOhms) = (unit, sourceOhms);
        constantPower = unit is SwitchModeResponse switchMode ? new ConstantPowerSolver(Bank, switchMode, sourceOhms) : null;
    }

    /// <summary>The bank at the last answer.</summary>
    public BankSolver Bank { get; }

    /// <summary>Both operating points and the limit, for a constant-power unit; null for any other.</summary>
    public ConstantPowerSolver? ConstantPower => constantPower;

    /// <summary>The operating point at a supply voltage; false where there is none, and then the point is NaN all over.</summary>
    public bool TrySolve(double volts, out UnitPoint point)
    {
        if (constantPower is null)
        {
            point = Solve(volts);
            return true;
        }

        if (constantPower.TryRun(volts, out point))
        {
            Bank.Carry(point.Amps);
            return true;
        }

        point = UnitPoint.None;
        return false;
    }

    /// <summary>The operating point of a unit that has exactly one at any voltage.</summary>
    public UnitPoint Solve(double volts)
    {
        var plain = unit.PlainOhms;
        if (!double.IsNaN(plain))
        {
            var amps = Bank.Feed(volts, plain + sourceOhms);
            return UnitPoint.Sinusoid(amps, amps * plain, amps * amps * plain);
        }

        // The bank's resistance grows with its current, and the unit's current falls with resistance before it: one meeting point.
        // Between cold and shorted it is bracketed; the Illinois rule (regula falsi that halves a stuck end) closes in.
        var shorted = Bank.Feed(volts, sourceOhms);
        var high = Math.Log(Bank.BankVolts / shorted) + 1e-9;
        var low = Math.Log(ColdOhms());
        var bracket = new Bracket(low, Excess(low, volts, out _), high, Excess(high, volts, out var point));
        for (var iteration = 0; iteration < MostIterations && bracket.Width > Tolerance; iteration++)
        {
            var middle = bracket.Next;
            var excess = Excess(middle, volts, out point);
            if (Math.Abs(excess) < Tolerance)
            {
                break;
            }

            bracket.Take(middle, excess);
        }

        return point;
    }

    // How much more resistance, as a logarithm, the bank has at the unit's current than was supposed.
    private double Excess(double logOhms, double volts, out UnitPoint point)
    {
        var supposed = Math.Exp(logOhms);
        point = unit.At(volts, supposed + sourceOhms);
        var carried = point.Amps > 1e-12 ? Bank.Carry(point.Amps) / point.Amps : ColdOhms();
        return Math.Log(carried) - logOhms;
    }

    private double ColdOhms() => Bank.Carry(1e-6) / 1e-6;
}
