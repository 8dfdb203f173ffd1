namespace Lampwarden.Analysis.Watching;

/// <summary>
/// Learns from suspicions that came to nothing. Where the room is kept by a thermostat the likelihood of a fault rises and falls with every
/// cycle; each peak that has passed says how high a mere cycle reaches here, and the threshold keeps its distance from it.
/// </summary>
internal sealed class Unrest
{
    private const double MemorySeconds = 6 * 3600;
    private const double PassedShare = 0.4;
    private const double LeastPeak = 4;
    private const double Distance = 1.6;
    private const double FreeRatio = 9;
    private const double MostExtra = 25;

    private double highest;
    private double usual;
    private double lastSeconds;

    /// <summary>What the threshold is to be raised by.</summary>
    public double Extra => Math.Clamp((usual * Distance) - FreeRatio, 0, MostExtra);

    public double Usual => usual;

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

    public void Transfer(StateStream state)
    {
        state.Field(ref highest);
        state.Field(ref usual);
        state.Field(ref lastSeconds);
    }
}
