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

    public SteadySolver(Bank bank, UnitResponse unit, double sourceOhms = 0)
    {
        Bank = new BankSolver(bank);
        (this.unit, this.sourceOhms) = (unit, sourceOhms);
    }

    /// <summary>The bank at the last answer.</summary>
    public BankSolver Bank { get; }

    /// <summary>The operating point at a supply voltage.</summary>
    public UnitPoint Solve(double volts)
    {
        var plain = unit.PlainOhms;
        if (!double.IsNaN(plain))
        {
            var amps = Bank.Feed(volts, plain + sourceOhms);
            return new UnitPoint(amps, amps * plain, amps * amps * plain);
        }

        // The bank's resistance grows with its current, and the unit's current falls with resistance before it: one meeting point.
        // Between cold and shorted it is bracketed; the Illinois rule (regula falsi that halves a stuck end) closes in.
        var shorted = Bank.Feed(volts, sourceOhms);
        var high = Math.Log(Bank.BankVolts / shorted) + 1e-9;
        var low = Math.Log(ColdOhms());
        var lowExcess = Excess(low, volts, out _);
        var highExcess = Excess(high, volts, out var point);
        var lastSide = 0;
        for (var iteration = 0; iteration < MostIterations && high - low > Tolerance; iteration++)
        {
            var middle = (low * highExcess - high * lowExcess) / (highExcess - lowExcess);
            if (!(middle > low && middle < high))
            {
                middle = 0.5 * (low + high);
            }

            var excess = Excess(middle, volts, out point);
            if (Math.Abs(excess) < Tolerance)
            {
                return point;
            }

            if (excess > 0)
            {
                highExcess *= lastSide > 0 ? 0.5 : 1;
                (low, lowExcess, lastSide) = (middle, excess, 1);
            }
            else
            {
                lowExcess *= lastSide < 0 ? 0.5 : 1;
                (high, highExcess, lastSide) = (middle, excess, -1);
            }
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

    private double ColdOhms() => Bank.Carry(1e-9) / 1e-9;
}
