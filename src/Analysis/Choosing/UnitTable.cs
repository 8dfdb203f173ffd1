using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Units;
using MathNet.Numerics.Interpolation;

namespace Lampwarden.Analysis.Choosing;

/// <summary>
/// A unit's current and volts against the resistance before it, worked out once: what a bank looks like to the unit is its resistance alone,
/// so thousands of banks can be tried against one table.
/// </summary>
internal sealed class UnitTable
{
    private const int Points = 48;

    private readonly double[] logOhms = new double[Points];
    private readonly bool[] runs = new bool[Points];
    private readonly CubicSpline amps;
    private readonly CubicSpline volts;

    public UnitTable(Mains mains, Unit unit, double leastOhms, double mostOhms)
    {
        var response = unit.NewResponse(mains);
        var converterWatts = unit is SwitchModeUnit switchMode ? switchMode.ConverterWatts : 0;
        var (first, step) = (Math.Log(leastOhms), Math.Log(mostOhms / leastOhms) / (Points - 1));
        double[] ampsThere = new double[Points], voltsThere = new double[Points];
        for (var point = 0; point < Points; point++)
        {
            logOhms[point] = first + point * step;
            var at = response.At(mains.Volts, Math.Exp(logOhms[point]));
            (ampsThere[point], voltsThere[point]) = (Math.Log(Math.Max(at.Amps, 1e-9)), at.Volts);
            runs[point] = at.Watts >= 0.99 * converterWatts;
        }

        amps = CubicSpline.InterpolatePchipSorted(logOhms, ampsThere);
        volts = CubicSpline.InterpolatePchipSorted(logOhms, voltsThere);
    }

    /// <summary>Where a bank and the unit meet; false where the unit does not run.</summary>
    public bool TryMeet(BankSolver bank, out double lineAmps, out double unitVolts)
    {
        // From the cold bank upwards: the first place where the bank has no more resistance than was supposed is the running one.
        var cold = Math.Log(bank.Carry(1e-6) / 1e-6);
        var low = Math.Max(cold, logOhms[0]);
        var lowExcess = Excess(bank, low);
        if (lowExcess <= 0)
        {
            return Answer(low, out lineAmps, out unitVolts);
        }

        for (var point = 0; point < Points; point++)
        {
            if (logOhms[point] <= low)
            {
                continue;
            }

            if (!runs[point])
            {
                break;
            }

            var excess = Excess(bank, logOhms[point]);
            if (excess <= 0)
            {
                return Answer(Meet(bank, low, lowExcess, logOhms[point], excess), out lineAmps, out unitVolts);
            }

            (low, lowExcess) = (logOhms[point], excess);
        }

        (lineAmps, unitVolts) = (double.NaN, double.NaN);
        return false;
    }

    private double Meet(BankSolver bank, double low, double lowExcess, double high, double highExcess)
    {
        var bracket = new Bracket(low, lowExcess, high, highExcess);
        var place = high;
        for (var iteration = 0; iteration < 30 && bracket.Width > 1e-6; iteration++)
        {
            place = bracket.Next;
            var excess = Excess(bank, place);
            if (Math.Abs(excess) < 1e-6)
            {
                break;
            }

            bracket.Take(place, excess);
        }

        return place;
    }

    private bool Answer(double place, out double lineAmps, out double unitVolts)
    {
        (lineAmps, unitVolts) = (Math.Exp(amps.Interpolate(place)), Math.Max(0, volts.Interpolate(place)));
        return true;
    }

    private double Excess(BankSolver bank, double place)
    {
        var current = Math.Exp(amps.Interpolate(place));
        return Math.Log(bank.Carry(current) / current) - place;
    }
}
