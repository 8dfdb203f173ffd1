namespace Lampwarden.Analysis.Units;

/// <summary>A unit in the periodic steady state, fed from a sinusoidal source through a constant resistance.</summary>
internal abstract class UnitResponse
{
    /// <summary>A constant resistance, if that is all the unit is; NaN otherwise. It opens a quicker way of solving.</summary>
    public virtual double PlainOhms => double.NaN;

    /// <summary>The operating point.</summary>
    /// <param name="volts">Source, V RMS.</param>
    /// <param name="seriesOhms">Resistance before the unit, at least 1e-6 ohm.</param>
    public abstract UnitPoint At(double volts, double seriesOhms);
}
