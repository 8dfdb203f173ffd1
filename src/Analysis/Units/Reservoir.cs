namespace Lampwarden.Analysis.Units;

/// <summary>
/// A rectifier charging a capacitor that feeds a load: the common part of rectifier, half-wave and switch-mode units. Diodes are a
/// constant drop; a load takes a conductance or a constant power.
/// </summary>
/// <param name="Drop">Volts lost in the conducting diodes.</param>
/// <param name="InnerOhms">Resistance between the line and the capacitor.</param>
/// <param name="Farads">The capacitor; above 0.</param>
/// <param name="FullWave">A bridge; false conducts on the positive half only.</param>
internal readonly record struct Reservoir(double Drop, double InnerOhms, double Farads, bool FullWave)
{
    // Below this share of the peak a constant-power load is a constant resistance, so that an empty capacitor draws nothing absurd.
    private const double WeakVolts = 5;
    private const int StepsPerHalf = 120;

    /// <summary>Current out of the capacitor at its volts.</summary>
    public static double LoadAmps(double volts, double siemens, double watts) =>
        siemens * volts + (watts == 0 ? 0 : volts > WeakVolts ? watts / volts : watts * volts / (WeakVolts * WeakVolts));

    /// <summary>Line current at an instant.</summary>
    public double LineAmps(double volts, double seriesOhms, double reservoirVolts)
    {
        var over = Math.Abs(volts) - Drop - reservoirVolts;
        return over <= 0 || (!FullWave && volts < 0) ? 0 : Math.CopySign(over / (seriesOhms + InnerOhms), volts);
    }

    /// <summary>The capacitor's volts one half cycle (bridge) or one cycle (half-wave) after the source's upward zero.</summary>
    /// <param name="peak">Source peak in volts.</param>
    /// <param name="hertz">Mains frequency.</param>
    /// <param name="seriesOhms">Resistance before the unit.</param>
    /// <param name="start">The capacitor's volts at the zero.</param>
    /// <param name="siemens">Conductance of the load.</param>
    /// <param name="watts">Constant power of the load.</param>
    /// <param name="sums">Takes the instants on the way.</param>
    public double Turn(double peak, double hertz, double seriesOhms, double start, double siemens, double watts, ref WaveSums sums)
    {
        var halves = FullWave ? 1 : 2;

        // Runge-Kutta needs a step below about twice the time constant of charging.
        var charging = (seriesOhms + InnerOhms) * Farads;
        var perHalf = StepsPerHalf * (int)Math.Clamp(Math.Ceiling(1 / (2 * hertz * StepsPerHalf * 1.5 * charging)), 1, 50);
        var step = 1 / (2 * hertz * perHalf);
        var volts = start;

        // The sine by rotation: two multiplications instead of a call, three times a step.
        var (turnSine, turnCosine) = Math.SinCos(Math.PI / (2 * perHalf));
        double sine = 0, cosine = 1;
        for (var index = 0; index < halves * perHalf; index++)
        {
            var source = peak * sine;
            (sine, cosine) = (sine * turnCosine + cosine * turnSine, cosine * turnCosine - sine * turnSine);
            var middle = peak * sine;
            (sine, cosine) = (sine * turnCosine + cosine * turnSine, cosine * turnCosine - sine * turnSine);
            var end = peak * sine;
            var amps = LineAmps(source, seriesOhms, volts);
            sums.Add(amps, source - seriesOhms * amps);
            var rate0 = RateOf(source, seriesOhms, volts, siemens, watts);
            var rate1 = RateOf(middle, seriesOhms, volts + 0.5 * step * rate0, siemens, watts);
            var rate2 = RateOf(middle, seriesOhms, volts + 0.5 * step * rate1, siemens, watts);
            var rate3 = RateOf(end, seriesOhms, volts + step * rate2, siemens, watts);
            volts = Math.Max(0, volts + step / 6 * (rate0 + 2 * (rate1 + rate2) + rate3));
        }

        return volts;
    }

    /// <summary>Rate of the capacitor's volts.</summary>
    public double RateOf(double source, double seriesOhms, double reservoirVolts, double siemens, double watts) =>
        (Math.Abs(LineAmps(source, seriesOhms, reservoirVolts)) - LoadAmps(Math.Max(0, reservoirVolts), siemens, watts)) / Farads;

    /// <summary>The periodic steady state with a resistive load: the capacitor ends each turn where it began.</summary>
    public UnitPoint Settle(double volts, double hertz, double seriesOhms, double siemens)
    {
        var peak = Math.Sqrt(2) * volts;
        var sums = new WaveSums();
        var start = 0.0;
        var bracket = new Bracket(0, Turn(peak, hertz, seriesOhms, 0, siemens, 0, ref sums), peak, Turn(peak, hertz, seriesOhms, peak, siemens, 0, ref sums) - peak - 1e-12);
        for (var iteration = 0; iteration < 60 && bracket.Width > 1e-9 * peak; iteration++)
        {
            start = bracket.Next;
            var excess = Turn(peak, hertz, seriesOhms, start, siemens, 0, ref sums) - start;
            if (Math.Abs(excess) < 1e-8 * peak)
            {
                break;
            }

            bracket.Take(start, excess);
        }

        sums = new WaveSums();
        Turn(peak, hertz, seriesOhms, start, siemens, 0, ref sums);
        if (FullWave)
        {
            return sums.Point(mirrored: true);
        }

        var direct = new WaveSums(sums.Point(mirrored: false).DirectAmps);
        Turn(peak, hertz, seriesOhms, start, siemens, 0, ref direct);
        return direct.Point(mirrored: false);
    }
}
