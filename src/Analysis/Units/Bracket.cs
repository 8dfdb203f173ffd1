namespace Lampwarden.Analysis.Units;

/// <summary>
/// Root of a falling function between two ends by regula falsi with the Illinois rule (a stuck end counts half), without allocating.
/// Stops when the bracket or the value is within tolerance. Use: feed <see cref="Next"/> to the function and its value to <see cref="Take"/>.
/// </summary>
internal struct Bracket(double low, double lowValue, double high, double highValue)
{
    private int lastSide;

    public readonly double Width => high - low;

    public readonly double Next
    {
        get
        {
            var middle = (low * highValue - high * lowValue) / (highValue - lowValue);
            return middle > low && middle < high ? middle : 0.5 * (low + high);
        }
    }

    public void Take(double place, double value)
    {
        if (value > 0)
        {
            highValue *= lastSide > 0 ? 0.5 : 1;
            (low, lowValue, lastSide) = (place, value, 1);
        }
        else
        {
            lowValue *= lastSide < 0 ? 0.5 : 1;
            (high, highValue, lastSide) = (place, value, -1);
        }
    }
}
