namespace Lampwarden.Analysis.Prediction;

/// <summary>What a prediction rests on beside bank and unit. Standard uncertainties are one sigma, relative where not said otherwise.</summary>
public sealed record PredictionSettings
{
    /// <summary>The meter whose readings are predicted.</summary>
    public PredictedMeter Meter { get; init; } = new();

    /// <summary>Length of the meter's window in seconds, above 0: the same value as in <see cref="Meter"/>.</summary>
    public double MeterWindowSeconds
    {
        get => Meter.WindowSeconds;
        init => Meter = Meter with { WindowSeconds = value };
    }

    /// <summary>Resistance of the supply and its leads in ohms, 0 or more; 0 gives the highest peak.</summary>
    public double SourceOhms { get; init; }

    /// <summary>How well the mains voltage is known: 2 % where it is not measured, some 0.5 % where it is.</summary>
    public double MainsUncertainty { get; init; } = 0.02;

    /// <summary>
    /// How well the unit's watts (or ohms) are known; NaN takes 10 % for watts from a plate, 4 % for a lamp, 1 % for ohms.
    /// </summary>
    public double UnitUncertainty { get; init; } = double.NaN;

    /// <summary>How well the room's temperature is known, in kelvin; moves only the cold resistance.</summary>
    public double RoomUncertaintyKelvin { get; init; } = 3;

    /// <summary>False leaves the intervals out, and the work they need; the band is always given.</summary>
    public bool WithIntervals { get; init; } = true;
}
