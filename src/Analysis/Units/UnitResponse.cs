namespace Lampwarden.Analysis.Units;

/// <summary>A unit in the steady state, as RMS values, fed from a sinusoidal source through a constant resistance.</summary>
internal abstract class UnitResponse
{
    /// <summary>A constant resistance, if that is all the unit is; NaN otherwise. It opens a quicker way of solving.</summary>
    public virtual double PlainOhms => double.NaN;

    /// <summary>The operating point.</summary>
    /// <param name="volts">Source, V RMS.</param>
    /// <param name="seriesOhms">Resistance before the unit, at least 1e-6 ohm.</param>
    public abstract UnitPoint At(double volts, double seriesOhms);
}

/// <summary>What a unit does in the steady state.</summary>
/// <param name="Amps">True RMS line current.</param>
/// <param name="Volts">True RMS volts across the unit.</param>
/// <param name="Watts">Real power.</param>
internal readonly record struct UnitPoint(double Amps, double Volts, double Watts)
{
    /// <summary>Real power over RMS volts times RMS amperes; NaN where either is zero.</summary>
    public double PowerFactor => Amps > 0 && Volts > 0 ? Math.Min(1, Watts / (Amps * Volts)) : double.NaN;
}
