using Lampwarden.Analysis.Tungsten;

namespace Lampwarden.Analysis.Lamps;

/// <summary>
/// One tungsten filament as a single body at one temperature: resistance, losses, wire and heat. Equations are numbered as in docs/model.md.
/// Immutable and thread-safe.
/// </summary>
/// <param name="Watts">Power at <paramref name="Volts"/>, in W.</param>
/// <param name="Volts">Voltage of the known point (nameplate or calibration), in V RMS.</param>
/// <param name="HotKelvin">Filament temperature at that point, in K.</param>
/// <param name="GasShare">Share of the power lost to the gas at that point, 0 to 0.3.</param>
/// <param name="LeadShare">Share lost along the leads at that point, 0 to 0.1.</param>
/// <param name="CoilFactor">Effective radiating area over wire surface, 0.3 to 1; sets the mass and so only the speed.</param>
/// <param name="AmbientKelvin">Temperature of the cold filament and its surroundings, in K.</param>
public sealed record Filament(
    double Watts, double Volts, double HotKelvin, double GasShare, double LeadShare, double CoilFactor, double AmbientKelvin)
{
    private double AmbientGas => Math.Pow(AmbientKelvin, Lamp.GasExponent);

    private double HotRadiation => Radiation(HotKelvin);

    /// <summary>Resistance at the known point, in ohms.</summary>
    public double HotOhms => Volts * Volts / Watts;

    /// <summary>Resistance at the temperature of the surroundings, in ohms.</summary>
    public double ColdOhms => Ohms(AmbientKelvin);

    /// <summary>Radiating area of the wire in m2 (equation 7).</summary>
    public double WireSquareMetres =>
        (1 - GasShare - LeadShare) * Watts / (CoilFactor * TungstenProperties.StefanBoltzmann * HotRadiation);

    /// <summary>Diameter of the wire in metres (equation 7).</summary>
    public double WireMetres => Math.Cbrt(
        4 * TungstenProperties.Resistivity300OhmMetres * TungstenProperties.ResistanceRatio(HotKelvin) * WireSquareMetres
        / (Math.PI * Math.PI * HotOhms));

    /// <summary>Mass of the wire in kg (equation 7).</summary>
    public double Kilograms => TungstenProperties.DensityKilogramsPerCubicMetre * WireSquareMetres * WireMetres / 4;

    /// <summary>Resistance at a temperature in kelvin (equation 4).</summary>
    public double Ohms(double kelvin) => HotOhms * TungstenProperties.ResistanceRatio(kelvin) / TungstenProperties.ResistanceRatio(HotKelvin);

    /// <summary>Power lost at a temperature in kelvin, in W (equation 5): radiation, gas and leads.</summary>
    public double LossWatts(double kelvin) => Watts * (
        (1 - GasShare - LeadShare) * Radiation(kelvin) / HotRadiation
        + GasShare * (Math.Pow(kelvin, Lamp.GasExponent) - AmbientGas) / (Math.Pow(HotKelvin, Lamp.GasExponent) - AmbientGas)
        + LeadShare * (kelvin - AmbientKelvin) / (HotKelvin - AmbientKelvin));

    /// <summary>Heat capacity in J/K at a temperature in kelvin.</summary>
    public double HeatJoulesPerKelvin(double kelvin) => Kilograms * TungstenProperties.SpecificHeat(kelvin);

    private double Radiation(double kelvin) =>
        TungstenProperties.Emissivity(kelvin) * (Math.Pow(kelvin, 4) - Math.Pow(AmbientKelvin, 4));
}
