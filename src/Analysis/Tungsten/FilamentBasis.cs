namespace Lampwarden.Analysis.Tungsten;

/// <summary>
/// The tungsten curves at the temperatures from which a steady lamp curve is made: close together just above the surroundings, where
/// resistance and loss both begin, wider above. Every lamp in one room shares them.
/// </summary>
internal sealed class FilamentBasis
{
    public const int Count = 500;

    private const double FirstStepKelvin = 1e-3;
    private const double HottestKelvin = 3650;

    private static readonly FilamentBasis Room = new(Lamps.Lamp.RoomKelvin);

    private FilamentBasis(double ambientKelvin)
    {
        AmbientKelvin = ambientKelvin;
        var growth = Math.Pow((HottestKelvin - ambientKelvin) / FirstStepKelvin, 1.0 / (Count - 1));
        for (var index = 0; index < Count; index++)
        {
            var kelvin = ambientKelvin + FirstStepKelvin * Math.Pow(growth, index);
            Kelvin[index] = kelvin;
            LogRatio[index] = Math.Log(TungstenProperties.ResistanceRatio(kelvin));
            Radiation[index] = TungstenProperties.Emissivity(kelvin) * (Math.Pow(kelvin, 4) - Math.Pow(ambientKelvin, 4));
            Gas[index] = Math.Pow(kelvin, Lamps.Lamp.GasExponent) - Math.Pow(ambientKelvin, Lamps.Lamp.GasExponent);
        }
    }

    public double AmbientKelvin { get; }

    public double[] Kelvin { get; } = new double[Count];

    /// <summary>Logarithm of the resistance ratio.</summary>
    public double[] LogRatio { get; } = new double[Count];

    /// <summary>Net radiation, eps (T^4 - Ta^4).</summary>
    public double[] Radiation { get; } = new double[Count];

    /// <summary>Gas conduction, T^1.7 - Ta^1.7.</summary>
    public double[] Gas { get; } = new double[Count];

    public static FilamentBasis At(double ambientKelvin) => ambientKelvin == Room.AmbientKelvin ? Room : new FilamentBasis(ambientKelvin);
}
