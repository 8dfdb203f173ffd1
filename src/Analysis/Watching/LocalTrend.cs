namespace Lampwarden.Analysis.Watching;

/// <summary>
/// The last few seconds as a straight line (alpha-beta filter), so that a fast climb is not taken for a jump: a jump stands out from the
/// line and from the learned level, a climb from the level alone.
/// </summary>
internal sealed class LocalTrend
{
    private const double TimeConstantSeconds = 6;
    private const double LongestReachSeconds = 4 * TimeConstantSeconds;
    private double level = double.NaN;
    private double slope;
    private double last;

    /// <summary>What the line foretells for a moment; NaN before the first reading, and so long after the last that no line reaches there.</summary>
    public double At(double seconds) => seconds - last > LongestReachSeconds ? double.NaN : level + (slope * (seconds - last));

    /// <summary>Follows one reading, pulled by no more than <paramref name="clip"/>.</summary>
    public void Follow(double seconds, double value, double clip)
    {
        if (double.IsNaN(level) || seconds - last > LongestReachSeconds)
        {
            (level, slope, last) = (value, 0, seconds);
            return;
        }

        var dt = seconds - last;
        if (dt <= 0)
        {
            return;
        }

        var alpha = 1 - Math.Exp(-2 * dt / TimeConstantSeconds);
        var beta = alpha * alpha / (2 - alpha);
        var foretold = At(seconds);
        var surprise = Math.Clamp(value - foretold, -clip, clip);
        level = foretold + (alpha * surprise);
        slope += beta * surprise / dt;
        last = seconds;
    }

    /// <summary>Starts on a known line.</summary>
    public void Begin(double seconds, double value, double slopePerSecond) => (level, slope, last) = (value, slopePerSecond, seconds);

    public void Restart() => (level, slope) = (double.NaN, 0);

    public void Transfer(StateStream state)
    {
        state.Field(ref level);
        state.Field(ref slope);
        state.Field(ref last);
    }
}
