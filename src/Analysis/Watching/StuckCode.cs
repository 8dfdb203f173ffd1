using MathNet.Numerics;

namespace Lampwarden.Analysis.Watching;

/// <summary>
/// A meter that repeats one code. How many equal codes are too many follows from the noise in counts: with the mean at the centre of a code
/// the next is the same with probability p = erf(count / (2 sqrt 2 sd)), and n = ln(hours of decisions x (1 - p)) / -ln p makes one false
/// verdict in a thousand hours. Where the noise is far below a count equal codes prove nothing; then the current must have stood still
/// while the mains moved it by several counts.
/// </summary>
internal sealed class StuckCode(double readingsPerSecond)
{
    private const double FalseVerdictHours = 1000;
    private const double LeastSeconds = 10;

    // A learned noise is never sure enough to convict on a handful of codes, however slowly they come.
    private const int LeastRepeats = 12;
    private const double LeastNoiseInCounts = 0.22;
    private const double MovedCounts = 4;
    private const double Safety = 1.5;

    private double code = double.NaN;
    private double since;
    private int repeats;
    private double leastDue;
    private double mostDue;
    private int changes;

    public double SinceSeconds => since;

    public int Repeats => repeats;

    /// <summary>Codes that have differed in a row since the last repeat: what clears the finding.</summary>
    public int Changes => changes;

    /// <summary>Takes one reading; true if the code has stood too long.</summary>
    /// <param name="seconds">Now.</param>
    /// <param name="amps">What is shown.</param>
    /// <param name="foretold">What the mains alone would make the current, A.</param>
    /// <param name="noise">How the meter scatters.</param>
    public bool Observe(double seconds, double amps, double foretold, MeterNoise noise)
    {
        if (amps != code)
        {
            (code, since, repeats, leastDue, mostDue) = (amps, seconds, 0, foretold, foretold);
            changes++;
            return false;
        }

        repeats++;
        changes = 0;
        (leastDue, mostDue) = (Math.Min(leastDue, foretold), Math.Max(mostDue, foretold));
        if (seconds - since < LeastSeconds || repeats < LeastRepeats || !double.IsFinite(noise.CountAmps) || amps <= 0)
        {
            return false;
        }

        var count = noise.CountAmps;
        if (mostDue - leastDue > MovedCounts * count)
        {
            return true;
        }

        // What the filter lets through from one reading to the next.
        var sd = noise.WhiteSd * (1 - noise.Pole) * amps;
        if (sd < LeastNoiseInCounts * count)
        {
            return false;
        }

        var same = SpecialFunctions.Erf(count / (2 * Math.Sqrt(2) * sd));
        return repeats > Safety * Math.Log(FalseVerdictHours * 3600 * readingsPerSecond * (1 - same)) / -Math.Log(same);
    }

    public void Transfer(StateStream state)
    {
        state.Field(ref code);
        state.Field(ref since);
        state.Field(ref repeats);
        state.Field(ref leastDue);
        state.Field(ref mostDue);
        state.Field(ref changes);
    }
}
