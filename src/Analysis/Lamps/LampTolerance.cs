namespace Lampwarden.Analysis.Lamps;

/// <summary>How well a lamp is known: standard uncertainties, and bounds where only bounds are known.</summary>
/// <param name="WattsShare">Of the watts at the known point, relative, one sigma.</param>
/// <param name="HotKelvin">Of the filament temperature there, one sigma.</param>
/// <param name="GasLow">Least gas loss share.</param>
/// <param name="GasHigh">Greatest gas loss share.</param>
/// <param name="LeadLow">Least lead loss share.</param>
/// <param name="LeadHigh">Greatest lead loss share.</param>
/// <param name="CoilShare">Of the coil factor, relative, one sigma.</param>
public sealed record LampTolerance(
    double WattsShare, double HotKelvin, double GasLow, double GasHigh, double LeadLow, double LeadHigh, double CoilShare)
{
    /// <summary>A gas-filled lamp known by its nameplate. The gas share covers two measured lamps and the handbook (docs/model.md).</summary>
    public static LampTolerance GasNameplate { get; } = new(0.04, 60, 0.03, 0.16, 0.005, 0.015, 0.12);

    /// <summary>A vacuum lamp known by its nameplate.</summary>
    public static LampTolerance VacuumNameplate { get; } = new(0.04, 60, 0, 0, 0, 0.01, 0.12);

    /// <summary>A plain resistor: nothing but its value.</summary>
    public static LampTolerance Resistor { get; } = new(0.01, 0, 0, 0, 0, 0, 0);
}
