namespace Lampwarden.Analysis.Units;

/// <summary>
/// Periodic steady states of a constant-power load behind a bridge and a capacitor. Given the capacitor's volts at the mains zero there is
/// one power that keeps them, so all states, running and sagging, lie on one curve over those volts: nothing is lost at the fold.
/// </summary>
internal sealed class SwitchModeResponse(SwitchModeUnit unit, double hertz) : UnitResponse
{
    private const int Scan = 40;

    private readonly Reservoir reservoir = unit.Reservoir;

    /// <summary>What the converter takes.</summary>
    public double ConverterWatts => unit.ConverterWatts;

    /// <summary>Below these volts on the capacitor the converter has stopped.</summary>
    public double StopPeak => Math.Sqrt(2) * unit.StopVolts;

    /// <summary>
    /// The running state at a constant resistance. Where the supply cannot run there, the state at the stop voltage: what it passes
    /// through as it drops out.
    /// </summary>
    public override UnitPoint At(double volts, double seriesOhms)
    {
        // From full volts down, power rises until the fold; the first crossing is the running state.
        var peak = Math.Sqrt(2) * volts - reservoir.Drop;
        if (peak <= StopPeak)
        {
            return default;
        }

        var last = peak;
        for (var index = 1; index <= Scan; index++)
        {
            var next = peak + (StopPeak - peak) * index / Scan;
            if (Keep(volts, seriesOhms, next, out _) >= ConverterWatts)
            {
                return Refine(volts, seriesOhms, next, last);
            }

            last = next;
        }

        Keep(volts, seriesOhms, StopPeak, out var dropping);
        return dropping;
    }

    /// <summary>The load power that keeps the capacitor at its volts at the mains zero, and the state then.</summary>
    public double Keep(double volts, double seriesOhms, double zeroVolts, out UnitPoint point)
    {
        // A turn's end falls with the power drawn: bracketed by nothing and by all that the source could give.
        var peak = Math.Sqrt(2) * volts;
        var most = peak * peak / (4 * (seriesOhms + reservoir.InnerOhms));
        var sums = new WaveSums();
        var bracket = new Bracket(
            0,
            reservoir.Turn(peak, hertz, seriesOhms, zeroVolts, 0, 0, ref sums) - zeroVolts,
            most,
            reservoir.Turn(peak, hertz, seriesOhms, zeroVolts, 0, most, ref sums) - zeroVolts - 1e-12);
        var watts = 0.0;
        for (var iteration = 0; iteration < 60 && bracket.Width > 1e-9 * most; iteration++)
        {
            watts = bracket.Next;
            var excess = reservoir.Turn(peak, hertz, seriesOhms, zeroVolts, 0, watts, ref sums) - zeroVolts;
            if (Math.Abs(excess) < 1e-8 * peak)
            {
                break;
            }

            bracket.Take(watts, excess);
        }

        sums = new WaveSums();
        reservoir.Turn(peak, hertz, seriesOhms, zeroVolts, 0, watts, ref sums);
        point = sums.Point(mirrored: true);
        return watts;
    }

    private UnitPoint Refine(double volts, double seriesOhms, double low, double high)
    {
        // Between high (too little power) and low (enough): power falls as the volts rise.
        var bracket = new Bracket(low, Keep(volts, seriesOhms, low, out var point) - ConverterWatts, high, -ConverterWatts);
        for (var iteration = 0; iteration < 40 && bracket.Width > 1e-7 * high; iteration++)
        {
            var middle = bracket.Next;
            var excess = Keep(volts, seriesOhms, middle, out point) - ConverterWatts;
            if (Math.Abs(excess) < 1e-8 * ConverterWatts)
            {
                break;
            }

            bracket.Take(middle, excess);
        }

        return point;
    }
}
