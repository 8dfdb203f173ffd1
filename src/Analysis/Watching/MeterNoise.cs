namespace Lampwarden.Analysis.Watching;

/// <summary>
/// Learns how the meter scatters: white noise through a one-pole filter, then rounding. The pole is read off the first two autocovariances
/// of what is left after prediction; the count size off the smallest step ever seen.
/// </summary>
internal sealed class MeterNoise(double readingsPerSecond)
{
    private const double MemorySeconds = 1800;
    private const double LeastReadings = 100;

    // Until learned: the worst noise expected of a bench meter (assumed).
    private const double FirstSd = 0.005;
    private const double MostPole = 0.8;

    // A meter's filter forgets within seconds (assumed): what scatters together for longer is the bench or the mains, not the meter.
    private const double SlowestFilterSeconds = 2.5;

    // Coarse counts stick to one code for a while, which looks like a filter: beyond this share of the variance the pole is not to be relied on.
    private const double CoarseShare = 0.25;

    private readonly double mostPole = Math.Min(MostPole, Math.Exp(-1 / (readingsPerSecond * SlowestFilterSeconds)));
    private double slow;
    private double previous = double.NaN;
    private double variance = FirstSd * FirstSd;
    private double covariance;
    private double count;
    private double leastStep = double.PositiveInfinity;
    private double previousAmps = double.NaN;

    /// <summary>Weight of the last reading in the next, 0 to 0.8.</summary>
    public double Pole { get; private set; }

    /// <summary>True where the counts are so coarse that the pole may be an artefact.</summary>
    public bool PoleDoubtful { get; private set; }

    /// <summary>Sd of one reading before the meter's filter, relative.</summary>
    public double WhiteSd { get; private set; } = FirstSd;

    /// <summary>Count size as seen, A; infinite before two readings differed.</summary>
    public double CountAmps => leastStep;

    /// <summary>Learns from one reading that is not in doubt.</summary>
    public void Learn(double residual, double amps)
    {
        var step = Math.Abs(amps - previousAmps);
        if (step > 1e-9 * amps && step < leastStep)
        {
            leastStep = step;
        }

        previousAmps = amps;
        slow += (residual - slow) / Math.Min(count + 1, 20 * readingsPerSecond);
        var limit = 4 * Math.Sqrt(variance);
        var left = Math.Clamp(residual - slow, -limit, limit);
        if (count < 10)
        {
            left = residual - slow;
        }

        count++;
        var share = 1 / Math.Min(count, MemorySeconds * readingsPerSecond);
        variance += ((left * left) - variance) * (count < 20 ? 0 : share);
        if (!double.IsNaN(previous))
        {
            covariance += ((left * previous) - covariance) * share;
        }

        previous = left;
        if (count >= LeastReadings)
        {
            Settle(amps);
        }
    }

    /// <summary>A gap or an outlier: the next reading has no neighbour.</summary>
    public void Skip() => previous = previousAmps = double.NaN;

    private void Settle(double amps)
    {
        var rounding = double.IsFinite(leastStep) ? leastStep / amps * (leastStep / amps) / 12 : 0;
        rounding = Math.Min(rounding, 0.8 * variance);
        PoleDoubtful = rounding > CoarseShare * variance;
        var smooth = Math.Max(variance - rounding, 0.1 * variance);
        var doubt = 1 / Math.Sqrt(count);
        var pole = covariance / smooth;
        Pole = pole < 3 * doubt ? 0 : Math.Min(pole, mostPole);
        var white = smooth * (1 + Pole) / (1 - Pole);

        // Undoing the filter spreads the rounding over two readings and magnifies it.
        WhiteSd = Math.Sqrt(white + (rounding * (1 + (Pole * Pole)) / ((1 - Pole) * (1 - Pole))));
    }

    public void Transfer(StateStream state)
    {
        state.Field(ref slow);
        state.Field(ref previous);
        state.Field(ref variance);
        state.Field(ref covariance);
        state.Field(ref count);
        state.Field(ref leastStep);
        state.Field(ref previousAmps);
        var (pole, white) = (Pole, WhiteSd);
        state.Field(ref pole);
        state.Field(ref white);
        (Pole, WhiteSd) = (pole, white);
        var doubtful = PoleDoubtful;
        state.Field(ref doubtful);
        PoleDoubtful = doubtful;
    }
}
