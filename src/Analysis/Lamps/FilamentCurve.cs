using Lampwarden.Analysis.Tungsten;

namespace Lampwarden.Analysis.Lamps;

/// <summary>
/// The steady curve of one filament, equation (6): current and temperature against volts up to a filament of 3650 K, on an even grid of
/// ln V with cubic pieces. Below the grid the filament is a cold resistor; above it the end slope carries on. Within 2e-5 of the
/// equations it was made from. Immutable and thread-safe.
/// </summary>
internal sealed class FilamentCurve
{
    private const int Cells = 512;

    private readonly double firstLog;
    private readonly double stepLog;

    // For each grid point: ln I, its slope, T, its slope; slopes are per grid step.
    private readonly double[] points = new double[(Cells + 1) * 4];

    public FilamentCurve(Filament filament)
    {
        ColdOhms = filament.ColdOhms;
        AmbientKelvin = filament.AmbientKelvin;
        var basis = FilamentBasis.At(AmbientKelvin);
        Span<double> logVolts = stackalloc double[FilamentBasis.Count];
        Span<double> logAmps = stackalloc double[FilamentBasis.Count];
        FillSources(filament, basis, logVolts, logAmps);
        firstLog = logVolts[0];
        stepLog = (logVolts[^1] - firstLog) / Cells;
        Resample(logVolts, logAmps, 0);
        Resample(logVolts, basis.Kelvin, 2);
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

    // Volts and amperes as logarithms at each temperature of the basis: no solving, as both follow from the loss and the resistance.
    private static void FillSources(Filament filament, FilamentBasis basis, Span<double> logVolts, Span<double> logAmps)
    {
        var (hot, ambient) = (filament.HotKelvin, filament.AmbientKelvin);
        var hotRadiation = TungstenProperties.Emissivity(hot) * (Math.Pow(hot, 4) - Math.Pow(ambient, 4));
        var radiation = filament.Watts * (1 - filament.GasShare - filament.LeadShare) / hotRadiation;
        var gas = filament.Watts * filament.GasShare / (Math.Pow(hot, Lamp.GasExponent) - Math.Pow(ambient, Lamp.GasExponent));
        var lead = filament.Watts * filament.LeadShare / (hot - ambient);
        var logOhmsPerRatio = Math.Log(filament.HotOhms / TungstenProperties.ResistanceRatio(hot));
        for (var index = 0; index < logVolts.Length; index++)
        {
            var loss = radiation * basis.Radiation[index] + gas * basis.Gas[index] + lead * (basis.Kelvin[index] - ambient);
            var (logLoss, logOhms) = (Math.Log(loss), logOhmsPerRatio + basis.LogRatio[index]);
            logVolts[index] = 0.5 * (logLoss + logOhms);
            logAmps[index] = 0.5 * (logLoss - logOhms);
        }
    }

    // Cubic pieces through uneven sources, with three-point slopes, read off on the even grid.
    private void Resample(ReadOnlySpan<double> x, ReadOnlySpan<double> y, int column)
    {
        var at = 0;
        double left = 0, right = 0;
        var lastAt = -1;
        for (var cell = 0; cell <= Cells; cell++)
        {
            var place = Math.Min(firstLog + cell * stepLog, x[^1]);
            while (at < x.Length - 2 && x[at + 1] < place)
            {
                at++;
            }

            if (at != lastAt)
            {
                (left, right, lastAt) = (Slope(x, y, at), Slope(x, y, at + 1), at);
            }

            var width = x[at + 1] - x[at];
            var t = (place - x[at]) / width;
            var (y0, m0, m1) = (y[at], left * width, right * width);
            var rise = y[at + 1] - y0;
            var (c2, c3) = (3 * rise - 2 * m0 - m1, m0 + m1 - 2 * rise);
            points[cell * 4 + column] = y0 + t * (m0 + t * (c2 + t * c3));
            points[cell * 4 + column + 1] = (m0 + t * (2 * c2 + t * 3 * c3)) / width * stepLog;
        }
    }

    private static double Slope(ReadOnlySpan<double> x, ReadOnlySpan<double> y, int at)
    {
        var before = at > 0 ? (y[at] - y[at - 1]) / (x[at] - x[at - 1]) : double.NaN;
        var after = at < x.Length - 1 ? (y[at + 1] - y[at]) / (x[at + 1] - x[at]) : double.NaN;
        if (double.IsNaN(before) || double.IsNaN(after))
        {
            return double.IsNaN(before) ? after : before;
        }

        var (h0, h1) = (x[at] - x[at - 1], x[at + 1] - x[at]);
        return (before * h1 + after * h0) / (h0 + h1);
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
