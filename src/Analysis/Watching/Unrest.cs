namespace Lampwarden.Analysis.Watching;

/// <summary>
/// Learns from suspicions that came to nothing. Where the room is kept by a thermostat the likelihood of a fault rises and falls with every
/// cycle; each peak that has passed says how high a mere cycle reaches here, and the threshold keeps its distance from it.
/// </summary>
internal sealed class Unrest
{
    private const double MemorySeconds = 10 * 3600;
    private const double PassedShare = 0.4;
    private const double LeastPeak = 3;
    private const double Distance = 2;
    private const double Most = 35;

    private double highest;
    private double usual;
    private double lastSeconds;

    /// <summary>The distance kept: no threshold may lie below it.</summary>
    public double Usual => Math.Min(usual * Distance, Most);

    public void Observe(double seconds, double ratio)
    {
        usual *= Math.Exp(-Math.Max(0, seconds - lastSeconds) / MemorySeconds);
        lastSeconds = seconds;
        highest = Math.Max(highest, ratio);
        if (ratio < PassedShare * highest)
        {
            if (highest > LeastPeak)
            {
                usual = Math.Max(usual, highest);
            }

            highest = Math.Max(0, ratio);
        }
    }

    /// <summary>What is suspected now was explained in another way and teaches nothing.</summary>
    public void Forget() => highest = 0;

    public void Transfer(StateStream state)
    {
        state.Field(ref highest);
        state.Field(ref usual);
        state.Field(ref lastSeconds);
    }
}
