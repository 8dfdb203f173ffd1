namespace Lampwarden.Analysis.Units;

/// <summary>What a unit does in the periodic steady state.</summary>
/// <param name="Amps">True RMS line current, direct current included.</param>
/// <param name="Volts">True RMS volts across the unit.</param>
/// <param name="Watts">Real power.</param>
/// <param name="DirectAmps">Mean of the current: its direct part.</param>
/// <param name="MeanAbsoluteAmps">Mean of the current without its sign.</param>
/// <param name="MeanDeviationAmps">Mean of the current without its sign, its direct part taken away.</param>
/// <param name="PeakAmps">Highest instantaneous current.</param>
internal readonly record struct UnitPoint(
    double Amps, double Volts, double Watts, double DirectAmps, double MeanAbsoluteAmps, double MeanDeviationAmps, double PeakAmps)
{
    /// <summary>Nothing can be said.</summary>
    public static UnitPoint None { get; } = new(double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN);

    /// <summary>Real power over RMS volts times RMS amperes; NaN where either is zero.</summary>
    public double PowerFactor => Amps > 0 && Volts > 0 ? Math.Clamp(Watts / (Amps * Volts), 0, 1) : double.NaN;

    /// <summary>A point where everything is a sinusoid.</summary>
    public static UnitPoint Sinusoid(double amps, double volts, double watts) =>
        new(amps, volts, watts, 0, amps * (2 * Math.Sqrt(2) / Math.PI), amps * (2 * Math.Sqrt(2) / Math.PI), amps * Math.Sqrt(2));
}
