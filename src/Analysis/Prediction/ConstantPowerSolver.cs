using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

/// <summary>
/// Both operating points of a constant-power unit behind a bank, and the most that the bank can carry. Every state of the circuit belongs
/// to one value of the capacitor's volts at the mains zero; from full volts downwards the power rises to the limit and falls again.
/// </summary>
internal sealed class ConstantPowerSolver(BankSolver bank, SwitchModeResponse unit, double sourceOhms)
{
    private const int Scan = 24;
    private const double LowestShare = 0.12;

    /// <summary>The running state; false where the bank cannot carry the unit, or the capacitor is below the stop voltage.</summary>
    public bool TryRun(double volts, out UnitPoint point)
    {
        var peak = Math.Sqrt(2) * volts;
        var high = 0.985 * peak;
        var highWatts = Excess(volts, high, out point);
        var last = high;
        for (var index = 1; index <= Scan && highWatts < 0; index++)
        {
            last = high;
            high = peak * (0.985 - (0.985 - LowestShare) * index / Scan);
            if (high < unit.StopPeak)
            {
                return false;
            }

            highWatts = Excess(volts, high, out point);
        }

        if (highWatts < 0)
        {
            return false;
        }

        return high >= unit.StopPeak && Refine(volts, high, highWatts, Math.Max(last, high * (1 + 1e-9)), out point);
    }

    /// <summary>
    /// The most power the bank can carry into this unit, its line current there, and the second operating point of the unit's power
    /// (all zero where there is none).
    /// </summary>
    public (double LimitWatts, UnitPoint AtLimit, UnitPoint Sagging) Fold(double volts)
    {
        var peak = Math.Sqrt(2) * volts;
        double limit = 0, limitPlace = 0;
        UnitPoint atLimit = default, sagging = default;
        double last = 0, lastWatts = 0;
        for (var index = 0; index <= 2 * Scan; index++)
        {
            var place = peak * (0.985 - (0.985 - LowestShare) * index / (2 * Scan));
            var watts = Excess(volts, place, out var point) + unit.ConverterWatts;
            if (watts > limit)
            {
                (limit, limitPlace, atLimit) = (watts, place, point);
            }
            else if (sagging.Amps == 0 && lastWatts >= unit.ConverterWatts && watts < unit.ConverterWatts && limit > unit.ConverterWatts)
            {
                // Linear between two scanned places: the sagging point is for information.
                var share = (lastWatts - unit.ConverterWatts) / (lastWatts - watts);
                Excess(volts, last + share * (place - last), out sagging);
            }

            (last, lastWatts) = (place, watts);
        }

        // A parabola through the top of the scan.
        var step = peak * (0.985 - LowestShare) / (2 * Scan);
        var above = Excess(volts, Math.Min(limitPlace + step, 0.99 * peak), out _) + unit.ConverterWatts;
        var below = Excess(volts, limitPlace - step, out _) + unit.ConverterWatts;
        var bend = above - 2 * limit + below;
        if (bend < 0)
        {
            var shift = Math.Clamp(0.5 * (below - above) / bend, -1, 1);
            limit = Math.Max(limit, Excess(volts, limitPlace + shift * step, out atLimit) + unit.ConverterWatts);
        }

        return (limit, atLimit, sagging);
    }

    // Power of the state with these capacitor volts, less the unit's own.
    private double Excess(double volts, double zeroVolts, out UnitPoint point)
    {
        var shorted = bank.Feed(volts, sourceOhms);
        var high = Math.Log(bank.BankVolts / shorted) + 1e-9;
        var low = Math.Log(bank.Carry(1e-6) / 1e-6);
        var bracket = new Bracket(low, Mismatch(low, out _, out _), high, Mismatch(high, out var watts, out point));
        for (var iteration = 0; iteration < 60 && bracket.Width > 1e-8; iteration++)
        {
            var middle = bracket.Next;
            var mismatch = Mismatch(middle, out watts, out point);
            if (Math.Abs(mismatch) < 1e-7)
            {
                break;
            }

            bracket.Take(middle, mismatch);
        }

        return watts - unit.ConverterWatts;

        double Mismatch(double logOhms, out double kept, out UnitPoint at)
        {
            var supposed = Math.Exp(logOhms);
            kept = unit.Keep(volts, supposed + sourceOhms, zeroVolts, out at);
            var carried = at.Amps > 1e-9 ? bank.Carry(at.Amps) / at.Amps : Math.Exp(low);
            return Math.Log(carried) - logOhms;
        }
    }

    private bool Refine(double volts, double low, double lowWatts, double high, out UnitPoint point)
    {
        var bracket = new Bracket(low, lowWatts, high, Excess(volts, high, out point));
        for (var iteration = 0; iteration < 40 && bracket.Width > 1e-7 * high; iteration++)
        {
            var middle = bracket.Next;
            var excess = Excess(volts, middle, out point);
            if (Math.Abs(excess) < 1e-7 * unit.ConverterWatts)
            {
                break;
            }

            bracket.Take(middle, excess);
        }

        return true;
    }
}
