using MathNet.Numerics.Interpolation;

namespace Lampwarden.Analysis.Tungsten;

/// <summary>
/// A positive quantity against temperature: monotone cubic (Fritsch-Carlson) through the logarithms of a table, carried on at its end
/// slopes. Between rows it never overshoots, so a rising table stays a rising curve.
/// </summary>
internal sealed class LogLogCurve
{
    private readonly CubicSpline spline;
    private readonly double firstLog;
    private readonly double lastLog;

    public LogLogCurve(IReadOnlyList<double> kelvin, IReadOnlyList<double> values)
    {
        var logKelvin = kelvin.Select(value => Math.Log(value)).ToArray();
        spline = CubicSpline.InterpolatePchipSorted(logKelvin, [.. values.Select(value => Math.Log(value))]);
        firstLog = logKelvin[0];
        lastLog = logKelvin[^1];
    }

    /// <summary>The value at a temperature in kelvin, which must be above zero.</summary>
    public double At(double kelvin)
    {
        var log = Math.Log(kelvin);
        var inside = Math.Clamp(log, firstLog, lastLog);
        var value = spline.Interpolate(inside);
        return Math.Exp(log == inside ? value : value + (log - inside) * spline.Differentiate(inside));
    }
}
