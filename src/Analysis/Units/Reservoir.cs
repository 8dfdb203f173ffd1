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
    private const int PulseSteps = 24;

    // A pulse of current has kinks; in time stepping they cost 0.5 to 1.4 % of the RMS current at 170 us and a tenth of that here.
    private const double LongestPulseStep = 42e-6;

    /// <summary>Current out of the capacitor at its volts.</summary>
    public static double LoadAmps(double volts, double siemens, double watts) =>
        siemens * volts + (watts == 0 ? 0 : volts > WeakVolts ? watts / volts : watts * volts / (WeakVolts * WeakVolts));

    /// <summary>Line current at an instant.</summary>
    public double LineAmps(double volts, double seriesOhms, double reservoirVolts)
    {
        var over = Math.Abs(volts) - Drop - reservoirVolts;
        return over <= 0 || (!FullWave && volts < 0) ? 0 : Math.CopySign(over / (seriesOhms + InnerOhms), volts);
    }

    /// <summary>
    /// The capacitor's volts one half cycle (bridge) or one cycle (half-wave) after the source's upward zero. Without current they follow a
    /// closed form; the one pulse of current is stepped by Runge-Kutta between its exact beginning and end, so that no kink is stepped over.
    /// </summary>
    /// <param name="peak">Source peak in volts.</param>
    /// <param name="hertz">Mains frequency.</param>
    /// <param name="seriesOhms">Resistance before the unit.</param>
    /// <param name="start">The capacitor's volts at the zero.</param>
    /// <param name="siemens">Conductance of the load.</param>
    /// <param name="watts">Constant power of the load; then the conductance must be zero.</param>
    /// <param name="sums">Takes the integrals on the way.</param>
    public double Turn(double peak, double hertz, double seriesOhms, double start, double siemens, double watts, ref WaveSums sums)
    {
        var radians = 2 * Math.PI * hertz;
        var whole = FullWave ? Math.PI : 2 * Math.PI;
        if (!TryFindPulse(peak, radians, start, siemens, watts, out var angle))
        {
            sums.AddIdle(peak, 0, whole, 1 / radians);
            return Discharge(start, whole / radians, siemens, watts);
        }

        sums.AddIdle(peak, 0, angle, 1 / radians);
        var volts = Discharge(start, angle / radians, siemens, watts);
        var charging = (seriesOhms + InnerOhms) * Farads;
        var steps = (int)Math.Clamp(Math.Ceiling((Math.PI - angle) / radians / (0.8 * charging)), PulseSteps, 5000);
        var step = (Math.PI - angle) / radians / steps;
        for (var index = 0; index < steps; index++)
        {
            var next = Pulse(peak, radians, seriesOhms, siemens, watts, angle, step, volts, out var firstRate, out var lastRate);
            var endAngle = angle + radians * step;
            var over = peak * Math.Sin(endAngle) - Drop - next;
            if (over <= 0)
            {
                // The end of the pulse: where a straight line between the two ends crosses zero, once refined by a shorter step.
                var before = peak * Math.Sin(angle) - Drop - volts;
                var share = before <= 0 ? 0 : before / (before - over);
                next = Pulse(peak, radians, seriesOhms, siemens, watts, angle, share * step, volts, out firstRate, out lastRate);
                AddPulse(ref sums, peak, radians, seriesOhms, angle, share * step, volts, next, firstRate, lastRate);
                (angle, volts) = (angle + radians * share * step, next);
                break;
            }

            AddPulse(ref sums, peak, radians, seriesOhms, angle, step, volts, next, firstRate, lastRate);
            (angle, volts) = (endAngle, next);
        }

        sums.AddIdle(peak, angle, whole, 1 / radians);
        return Discharge(volts, (whole - angle) / radians, siemens, watts);
    }

    /// <summary>Longest step in seconds for time stepping with this least resistance before the unit.</summary>
    public double LongestStepSeconds(double leastOhms) => Math.Min(LongestPulseStep, 1.4 * (leastOhms + InnerOhms) * Farads);

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

    // The capacitor's volts after a time without current.
    private double Discharge(double volts, double seconds, double siemens, double watts)
    {
        if (watts == 0)
        {
            return volts * Math.Exp(-siemens * seconds / Farads);
        }

        var square = volts * volts - 2 * watts * seconds / Farads;
        if (square > WeakVolts * WeakVolts)
        {
            return Math.Sqrt(square);
        }

        // Below the weak voltage the load is a resistance.
        var until = Math.Max(0, (volts * volts - WeakVolts * WeakVolts) * Farads / (2 * watts));
        return Math.Min(volts, WeakVolts) * Math.Exp(-(seconds - until) * watts / (WeakVolts * WeakVolts * Farads));
    }

    // The angle at which the rising source meets the falling capacitor, before the peak; false where it never does.
    private bool TryFindPulse(double peak, double radians, double start, double siemens, double watts, out double angle)
    {
        double low = 0, high = Math.PI / 2;
        for (; high < Math.PI && Over(peak, radians, start, siemens, watts, high) <= 0; high += 0.1)
        {
            low = high;
        }

        angle = high;
        if (high >= Math.PI)
        {
            return false;
        }

        var (lowOver, highOver) = (Over(peak, radians, start, siemens, watts, low), Over(peak, radians, start, siemens, watts, high));
        var bracket = new Bracket(low, -lowOver, high, -highOver);
        for (var iteration = 0; iteration < 40 && bracket.Width > 1e-9; iteration++)
        {
            angle = bracket.Next;
            var over = Over(peak, radians, start, siemens, watts, angle);
            if (Math.Abs(over) < 1e-9 * peak)
            {
                break;
            }

            bracket.Take(angle, -over);
        }

        return true;
    }

    private double Over(double peak, double radians, double start, double siemens, double watts, double angle) =>
        peak * Math.Sin(angle) - Drop - Discharge(start, angle / radians, siemens, watts);

    // One Runge-Kutta step within the pulse; the rates at its ends serve the integrals.
    private double Pulse(
        double peak, double radians, double seriesOhms, double siemens, double watts, double angle, double step, double volts, out double first, out double last)
    {
        var perOhm = 1 / (seriesOhms + InnerOhms);
        double Rate(in Reservoir self, double at, double now) =>
            ((peak * Math.Sin(at) - self.Drop - now) * perOhm - LoadAmps(Math.Max(0, now), siemens, watts)) / self.Farads;
        var half = angle + 0.5 * radians * step;
        first = Rate(this, angle, volts);
        var rate1 = Rate(this, half, volts + 0.5 * step * first);
        var rate2 = Rate(this, half, volts + 0.5 * step * rate1);
        var rate3 = Rate(this, angle + radians * step, volts + step * rate2);
        var next = volts + step / 6 * (first + 2 * (rate1 + rate2) + rate3);
        last = Rate(this, angle + radians * step, next);
        return next;
    }

    // Simpson's rule over one step, the middle from the cubic through both ends.
    private void AddPulse(
        ref WaveSums sums, double peak, double radians, double seriesOhms, double angle, double step, double volts, double next, double first, double last)
    {
        var middle = 0.5 * (volts + next) + step * (first - last) / 8;
        AddInstant(ref sums, peak * Math.Sin(angle), seriesOhms, volts, step / 6);
        AddInstant(ref sums, peak * Math.Sin(angle + 0.5 * radians * step), seriesOhms, middle, 4 * step / 6);
        AddInstant(ref sums, peak * Math.Sin(angle + radians * step), seriesOhms, next, step / 6);
    }

    private void AddInstant(ref WaveSums sums, double source, double seriesOhms, double volts, double weight)
    {
        var amps = Math.Max(0, source - Drop - volts) / (seriesOhms + InnerOhms);
        sums.Add(amps, source - seriesOhms * amps, weight);
    }
}
