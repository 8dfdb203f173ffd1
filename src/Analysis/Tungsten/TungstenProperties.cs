using MathNet.Numerics.RootFinding;

namespace Lampwarden.Analysis.Tungsten;

/// <summary>
/// Tungsten against temperature, interpolated from <see cref="TungstenTable"/>. Temperatures in kelvin; good from 270 to 3650 K
/// (below 300 and above 3600 K the end slope is carried on). Thread-safe.
/// </summary>
public static class TungstenProperties
{
    /// <summary>Stefan-Boltzmann constant in W/(m2 K4), CODATA 2018.</summary>
    public const double StefanBoltzmann = 5.670374e-8;

    /// <summary>Density at room temperature in kg/m3: White and Minges 1997 through Tolias 2017.</summary>
    public const double DensityKilogramsPerCubicMetre = 19250;

    /// <summary>Resistivity at 300 K in ohm metres: Jones and Langmuir 1927.</summary>
    public const double Resistivity300OhmMetres = 5.65e-8;

    /// <summary>Melting point in kelvin; no filament is hotter.</summary>
    public const double MeltingKelvin = 3695;

    /// <summary>Dull red first seen in the dark by most people: the Draper point, in kelvin.</summary>
    public const double FirstGlowKelvin = 798;

    // Jones and Langmuir count their radiation against surroundings at 293 K.
    private const double TableSurroundingsKelvin = 293;

    private static readonly double[] Rows = [.. Enumerable.Range(0, TungstenTable.Count).Select(row => TungstenTable.FirstKelvin + row * TungstenTable.StepKelvin)];

    private static readonly LogLogCurve Resistivity = new(Rows, TungstenTable.JonesLangmuirMicroOhmCentimetres.ToArray());
    private static readonly LogLogCurve Heat = new(Rows, TungstenTable.WhiteMingesJoulesPerKilogramKelvin.ToArray());
    private static readonly LogLogCurve Radiance = MakeEmissivity();

    /// <summary>Resistance relative to 300 K; rises from 1 to 20.35 at 3600 K.</summary>
    public static double ResistanceRatio(double kelvin) => Resistivity.At(kelvin) / TungstenTable.JonesLangmuirMicroOhmCentimetres[0];

    /// <summary>Total hemispherical emissivity, 0 to 1.</summary>
    public static double Emissivity(double kelvin) => Radiance.At(kelvin);

    /// <summary>Specific heat in J/(kg K).</summary>
    public static double SpecificHeat(double kelvin) => Heat.At(kelvin);

    /// <summary>Temperature in kelvin at which the resistance is <paramref name="ratio"/> times that at 300 K.</summary>
    /// <exception cref="ArgumentOutOfRangeException">The ratio lies outside 0.7 to 21.</exception>
    public static double KelvinOfRatio(double ratio)
    {
        if (!(ratio is >= 0.7 and <= 21))
        {
            throw new ArgumentOutOfRangeException(nameof(ratio), ratio, "A tungsten filament has 0.7 to 21 times its resistance at 300 K.");
        }

        return Brent.FindRoot(kelvin => ResistanceRatio(kelvin) - ratio, 200, 3800, 1e-9, 100);
    }

    private static LogLogCurve MakeEmissivity()
    {
        var radiated = TungstenTable.JonesLangmuirWattsPerSquareCentimetre;
        var emissivity = new double[Rows.Length - 1];
        for (var row = 1; row < Rows.Length; row++)
        {
            var blackBody = StefanBoltzmann * (Math.Pow(Rows[row], 4) - Math.Pow(TableSurroundingsKelvin, 4));
            emissivity[row - 1] = radiated[row] * 1e4 / blackBody;
        }

        return new LogLogCurve(Rows[1..], emissivity);
    }
}
