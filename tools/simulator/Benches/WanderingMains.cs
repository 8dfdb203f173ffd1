namespace Lampwarden.Simulator.Benches;

/// <summary>Mains volts that wander slowly about their nominal value: an Ornstein-Uhlenbeck process in steps of a second.</summary>
/// <param name="nominalVolts">Its mean.</param>
/// <param name="share">Standard deviation as a share of nominal.</param>
/// <param name="random">Where its steps come from.</param>
internal sealed class WanderingMains(double nominalVolts, double share, Random random)
{
    private const double TimeConstantSeconds = 1200;
    private double _offset = share * SimulatedBench.Normal(random);
    private long _second;

    /// <summary>Volts RMS at a time that never decreases between calls.</summary>
    public double At(double seconds)
    {
        for (; _second < (long)seconds; _second++)
        {
            _offset += -_offset / TimeConstantSeconds + share * Math.Sqrt(2 / TimeConstantSeconds) * SimulatedBench.Normal(random);
        }

        return nominalVolts * (1 + _offset);
    }
}
