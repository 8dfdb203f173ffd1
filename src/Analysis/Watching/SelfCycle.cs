namespace Lampwarden.Analysis.Watching;

/// <summary>
/// A unit with two healthy levels, switching between them by itself: a thermostat, a compressor. Learned from two goings and comings of
/// one size (one, if the user has declared it); from then on both levels are home, and only the timing and the levels are watched.
/// </summary>
internal sealed class SelfCycle
{
    private const double SameSize = 0.15, SameSizeLeast = 0.02;
    private const double HoldSeconds = 3;
    private const double OverdueTimes = 4, OverdueLeastSeconds = 60;

    private double logAway;
    private double leftSeconds = double.NaN;
    private double flippedSeconds;
    private double longestHome;
    private double longestAway;
    private int returns;
    private int closerInARow;

    /// <summary>The user has said that the unit cycles.</summary>
    public bool Declared { get; set; }

    /// <summary>Two levels are known.</summary>
    public bool Adopted { get; private set; }

    /// <summary>The unit is on its second level now.</summary>
    public bool Away { get; private set; }

    /// <summary>ln of the present level over the first.</summary>
    public double Offset => Adopted && Away ? logAway : 0;

    public double LogAway => logAway;

    public double LongestHomeSeconds => longestHome;

    public double LongestAwaySeconds => longestAway;

    /// <summary>A step has been confirmed.</summary>
    public void Left(double seconds, double change)
    {
        if (!IsSame(change, logAway))
        {
            returns = 0;
            logAway = change;
        }

        logAway += (change - logAway) / (returns + 1);
        longestHome = returns == 0 ? 0 : Math.Max(longestHome, seconds - flippedSeconds);
        leftSeconds = seconds;
    }

    /// <summary>The step was taken back; true if that makes a cycle.</summary>
    public bool Returned(double seconds)
    {
        if (Adopted || double.IsNaN(leftSeconds))
        {
            return false;
        }

        longestAway = Math.Max(returns == 0 ? 0 : longestAway, seconds - leftSeconds);
        returns++;
        flippedSeconds = seconds;
        if (returns < (Declared ? 1 : 2))
        {
            return false;
        }

        longestHome = Math.Max(longestHome, longestAway);
        (Adopted, Away) = (true, false);
        return true;
    }

    /// <summary>Takes one reading as ln over the first level; true if it must not be weighed: the unit is switching.</summary>
    public bool Switches(double seconds, double log)
    {
        if (!Adopted)
        {
            return false;
        }

        var other = Away ? 0 : logAway;
        var closer = Math.Abs(log - other) < Math.Abs(log - Offset);
        closerInARow = closer ? closerInARow + 1 : 0;
        if (closerInARow >= 2)
        {
            var lasted = seconds - flippedSeconds;
            (longestHome, longestAway) = Away ? (longestHome, Math.Max(longestAway, lasted)) : (Math.Max(longestHome, lasted), longestAway);
            Away = !Away;
            flippedSeconds = seconds;
            closerInARow = 0;
            return true;
        }

        return closer || seconds - flippedSeconds < HoldSeconds;
    }

    /// <summary>True where the unit has stayed on one level for much longer than ever before.</summary>
    public bool Overdue(double seconds) => Adopted
        && seconds - flippedSeconds > Math.Max(OverdueTimes * (Away ? longestAway : longestHome), OverdueLeastSeconds);

    /// <summary>A new level is being learned; what was seen of cycles no longer counts.</summary>
    public void Restart()
    {
        (Adopted, Away, returns, closerInARow) = (false, false, 0, 0);
        leftSeconds = double.NaN;
    }

    private static bool IsSame(double a, double b) => Math.Abs(a - b) < Math.Max(SameSize * Math.Abs(b), SameSizeLeast);

    public void Transfer(StateStream state)
    {
        state.Field(ref logAway);
        state.Field(ref leftSeconds);
        state.Field(ref flippedSeconds);
        state.Field(ref longestHome);
        state.Field(ref longestAway);
        state.Field(ref returns);
        state.Field(ref closerInARow);
        var (declared, adopted, away) = (Declared, Adopted, Away);
        state.Field(ref declared);
        state.Field(ref adopted);
        state.Field(ref away);
        (Declared, Adopted, Away) = (declared, adopted, away);
    }
}
