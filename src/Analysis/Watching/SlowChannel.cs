namespace Lampwarden.Analysis.Watching;

/// <summary>
/// Slow changes: ten-second means against a level that is learned fast at first and then all but frozen, weighed by a two-sided CUSUM
/// whose allowance shrinks as the unit warms through.
/// </summary>
internal sealed class SlowChannel
{
    public const double BlockSeconds = 10;
    private const double ThresholdPercentBlocks = 6;

    private double blockStart = double.NaN;
    private double blockSum;
    private int blockCount;
    private double startSeconds = double.NaN;
    private double level = double.NaN;
    private double excess;
    private double up;
    private double down;
    private double onsetUp;
    private double onsetDown;
    private double slopeBase = double.NaN;
    private double slopeBaseSeconds;

    /// <summary>Level the unit should show now, ln A; NaN before the first block.</summary>
    public double Level => level;

    /// <summary>Smoothed residual, relative.</summary>
    public double Excess => excess;

    public double OnsetUpSeconds => onsetUp;

    public double OnsetDownSeconds => onsetDown;

    /// <summary>Rise since the upward onset per hour, relative.</summary>
    public double SlopePerHour(double now) =>
        double.IsNaN(slopeBase) || now <= slopeBaseSeconds ? 0 : (excess - slopeBase) / (now - slopeBaseSeconds) * 3600;

    /// <summary>Takes one reading; +1 or -1 when a block shows a slow change.</summary>
    public int Observe(double seconds, double logAmps)
    {
        if (double.IsNaN(blockStart))
        {
            blockStart = startSeconds = seconds;
        }

        if (seconds - blockStart >= BlockSeconds && blockCount > 0)
        {
            var alarm = Close(blockStart, blockSum / blockCount);
            blockStart = seconds;
            blockSum = logAmps;
            blockCount = 1;
            return alarm;
        }

        blockSum += logAmps;
        blockCount++;
        return 0;
    }

    private int Close(double seconds, double mean)
    {
        if (double.IsNaN(level))
        {
            level = mean;
            return 0;
        }

        var age = seconds - startSeconds;
        var residual = mean - level;
        excess += (residual - excess) * 0.3;
        var allowance = age < 900 ? 0.03 : age < 2700 ? 0.015 : 0.01;
        if (up == 0)
        {
            onsetUp = slopeBaseSeconds = seconds;
            slopeBase = excess;
        }

        if (down == 0)
        {
            onsetDown = seconds;
        }

        up = Math.Max(0, up + residual - allowance);
        down = Math.Max(0, down - residual - allowance);
        var leak = age < 300 ? 0.2 : age < 900 ? 0.05 : age < 2700 ? 0.01 : 0.0005;
        level += Math.Clamp(residual * leak, -0.003, 0.003);
        return up > ThresholdPercentBlocks / 100 ? 1 : down > ThresholdPercentBlocks / 100 ? -1 : 0;
    }

    /// <summary>Starts again from a new level.</summary>
    public void Restart()
    {
        blockStart = double.NaN;
        level = double.NaN;
        blockSum = excess = up = down = 0;
        blockCount = 0;
    }

    public void Transfer(StateStream state)
    {
        state.Field(ref blockStart);
        state.Field(ref blockSum);
        state.Field(ref blockCount);
        state.Field(ref startSeconds);
        state.Field(ref level);
        state.Field(ref excess);
        state.Field(ref up);
        state.Field(ref down);
        state.Field(ref onsetUp);
        state.Field(ref onsetDown);
        state.Field(ref slopeBase);
        state.Field(ref slopeBaseSeconds);
    }
}
