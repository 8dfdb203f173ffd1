using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Tungsten;

/// <summary>One filament's factors on the columns of a <see cref="FilamentGrid"/>: equations (4), (5) and (8) ready for stepping.</summary>
internal readonly struct FilamentCoefficients
{
    /// <summary>Ohms per unit of the resistance ratio.</summary>
    public readonly double Ratio;

    /// <summary>Watts per unit of the net radiation column.</summary>
    public readonly double Radiation;

    /// <summary>Watts per unit of the gas column.</summary>
    public readonly double Gas;

    /// <summary>Watts per kelvin along the leads.</summary>
    public readonly double Lead;

    /// <summary>Watts to add so that nothing is lost at the temperature of the surroundings.</summary>
    public readonly double Offset;

    /// <summary>Reciprocal mass in 1/kg.</summary>
    public readonly double PerKilogram;

    public FilamentCoefficients(Filament filament, FilamentGrid grid)
    {
        var (hot, ambient) = (filament.HotKelvin, filament.AmbientKelvin);
        Ratio = filament.HotOhms / grid.Read(0, hot);
        Radiation = filament.Watts * (1 - filament.GasShare - filament.LeadShare) / (grid.Read(1, hot) - grid.Read(1, ambient));
        Gas = filament.Watts * filament.GasShare / (grid.Read(2, hot) - grid.Read(2, ambient));
        Lead = filament.Watts * filament.LeadShare / (hot - ambient);
        Offset = -(Radiation * grid.Read(1, ambient) + Gas * grid.Read(2, ambient) + Lead * ambient);
        PerKilogram = 1 / filament.Kilograms;
    }

    public double Ohms(FilamentGrid grid, double kelvin) => Ratio * grid.Read(0, kelvin);

    public double LossWatts(FilamentGrid grid, double kelvin) =>
        Radiation * grid.Read(1, kelvin) + Gas * grid.Read(2, kelvin) + Lead * kelvin + Offset;

    public double KelvinPerSecond(FilamentGrid grid, double kelvin, double watts) =>
        (watts - LossWatts(grid, kelvin)) * PerKilogram * grid.Read(3, kelvin);
}
