using MathNet.Numerics.Interpolation;

namespace Lampwarden.Analysis.Lamps;

/// <summary>
/// The steady curve of one filament, equation (6): current and temperature against volts from a thousandth of a volt up to a filament
/// of 3650 K, on an even grid of ln V with cubic pieces. Below the grid the filament is a cold resistor; above it the end slope carries on.
/// Within 2e-5 of the equations it was made from. Immutable and thread-safe.
/// </summary>
internal sealed class FilamentCurve
{
    private const double HottestKelvin = 3650;
    private const int Sources = 500;
    private const int Cells = 512;

    private readonly double firstLog;
    private readonly double stepLog;

    // For each grid point: ln I, its slope, T, its slope; slopes are per grid step.
    private readonly double[] points = new double[(Cells + 1) * 4];

    public FilamentCurve(Filament filament)
    {
        ColdOhms = filament.ColdOhms;
        AmbientKelvin = filament.AmbientKelvin;
        var logVolts = new double[Sources];
        var logAmps = new double[Sources];
        var kelvin = new double[Sources];
        var growth = Math.Pow((HottestKelvin - AmbientKelvin) / 1e-3, 1.0 / (Sources - 1));
        for (var index = 0; index < Sources; index++)
        {
            kelvin[index] = AmbientKelvin + 1e-3 * Math.Pow(growth, index);
            var logLoss = Math.Log(filament.LossWatts(kelvin[index]));
            var logOhms = Math.Log(filament.Ohms(kelvin[index]));
            logVolts[index] = 0.5 * (logLoss + logOhms);
            logAmps[index] = 0.5 * (logLoss - logOhms);
        }

        firstLog = logVolts[0];
        stepLog = (logVolts[^1] - firstLog) / Cells;
        var ampsSpline = CubicSpline.InterpolatePchipSorted(logVolts, logAmps);
        var kelvinSpline = CubicSpline.InterpolatePchipSorted(logVolts, kelvin);
        for (var cell = 0; cell <= Cells; cell++)
        {
            var log = Math.Min(firstLog + cell * stepLog, logVolts[^1]);
            points[cell * 4] = ampsSpline.Interpolate(log);
            points[cell * 4 + 1] = ampsSpline.Differentiate(log) * stepLog;
            points[cell * 4 + 2] = kelvinSpline.Interpolate(log);
            points[cell * 4 + 3] = kelvinSpline.Differentiate(log) * stepLog;
        }
    }

    public double ColdOhms { get; }

    public double AmbientKelvin { get; }

    /// <summary>Current at a voltage (both 0 or more) and its slope dI/dV in siemens.</summary>
    public double Amps(double volts, out double siemens)
    {
        var log = volts > 0 ? Math.Log(volts) : double.NegativeInfinity;
        if (log <= firstLog)
        {
            siemens = 1 / ColdOhms;
            return volts / ColdOhms;
        }

        var logAmps = Read(log, 0, out var exponent);
        var amps = Math.Exp(logAmps);
        siemens = exponent * amps / volts;
        return amps;
    }

    /// <summary>Steady temperature in kelvin at a voltage.</summary>
    public double Kelvin(double volts)
    {
        var log = volts > 0 ? Math.Log(volts) : double.NegativeInfinity;
        return log <= firstLog ? AmbientKelvin : Read(log, 2, out _);
    }

    private double Read(double log, int column, out double slope)
    {
        var position = (log - firstLog) / stepLog;
        var cell = (int)position;
        if (cell >= Cells)
        {
            slope = points[Cells * 4 + column + 1];
            var beyond = points[Cells * 4 + column] + (position - Cells) * slope;
            slope /= stepLog;
            return beyond;
        }

        var t = position - cell;
        var at = cell * 4 + column;
        double y0 = points[at], m0 = points[at + 1], y1 = points[at + 4], m1 = points[at + 5];
        var c2 = 3 * (y1 - y0) - 2 * m0 - m1;
        var c3 = m0 + m1 - 2 * (y1 - y0);
        slope = (m0 + t * (2 * c2 + t * 3 * c3)) / stepLog;
        return y0 + t * (m0 + t * (c2 + t * c3));
    }
}
