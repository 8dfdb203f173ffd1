namespace Lampwarden.Analysis.Prediction;

/// <summary>What a prediction rests on beside bank and unit. Standard uncertainties are one sigma, relative where not said otherwise.</summary>
public sealed record PredictionSettings
{
    /// <summary>Length of the meter's true-RMS window in seconds, above 0.</summary>
    public double MeterWindowSeconds { get; init; } = 0.2;

    /// <summary>Resistance of the supply and its leads in ohms, 0 or more; 0 gives the highest peak.</summary>
    public double SourceOhms { get; init; }

    /// <summary>How well the mains voltage is known.</summary>
    public double MainsUncertainty { get; init; } = 0.02;

    /// <summary>How well a lamp's watts at rated volts are known from its nameplate.</summary>
    public double LampWattsUncertainty { get; init; } = 0.04;

    /// <summary>How well the unit's watts are known from its plate.</summary>
    public double UnitUncertainty { get; init; } = 0.10;
}
