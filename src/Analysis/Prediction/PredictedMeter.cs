namespace Lampwarden.Analysis.Prediction;

/// <summary>Whether a meter sees direct current.</summary>
public enum MeterCoupling
{
    /// <summary>A capacitor or a subtraction takes the mean away: direct current is not seen.</summary>
    Ac,

    /// <summary>All is seen.</summary>
    AcDc,
}

/// <summary>How a meter makes one number of a waveform.</summary>
public enum MeterResponse
{
    /// <summary>Root of the mean square over its window.</summary>
    TrueRms,

    /// <summary>Mean of the rectified current, shown as the RMS of a sinusoid with that mean: wrong for any other waveform.</summary>
    MeanResponding,

    /// <summary>True RMS by a converter that follows the mean square with one time constant.</summary>
    FirstOrder,
}

/// <summary>What a meter makes of the line current.</summary>
public sealed record PredictedMeter
{
    /// <summary>Length of a window in seconds; for a first-order converter its time constant. Above 0.</summary>
    public double WindowSeconds { get; init; } = 0.2;

    /// <summary>Whether direct current is seen.</summary>
    public MeterCoupling Coupling { get; init; } = MeterCoupling.AcDc;

    /// <summary>How the number is made.</summary>
    public MeterResponse Response { get; init; } = MeterResponse.TrueRms;

    /// <summary>Stated accuracy, percent of reading part.</summary>
    public double PercentOfReading { get; init; } = 0.8;

    /// <summary>Stated accuracy, counts part.</summary>
    public double Counts { get; init; } = 3;

    /// <summary>Amperes of one count; 0 where the display is as fine as one likes.</summary>
    public double CountSize { get; init; } = 0.001;

    /// <summary>Highest current of the range; beyond, the meter shows overload (infinity here).</summary>
    public double RangeAmps { get; init; } = double.PositiveInfinity;

    /// <summary>
    /// Bound of the stated accuracy in A. Percent and counts are one bound and are added before anything else is done with them.
    /// </summary>
    public double BoundAmps(double amps) => PercentOfReading / 100 * Math.Abs(amps) + Counts * CountSize;

    /// <summary>Rounded to the display's counts; infinity beyond the range.</summary>
    public double Display(double amps) => amps > RangeAmps ? double.PositiveInfinity : CountSize > 0 ? Math.Round(amps / CountSize) * CountSize : amps;
}
