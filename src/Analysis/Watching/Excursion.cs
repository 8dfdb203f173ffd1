namespace Lampwarden.Analysis.Watching;

/// <summary>
/// The seconds and minutes after a sudden cry, in which it becomes clear what it was: a step that stays, a circuit that opens and closes,
/// contact trouble. Only counts; what is said about it is said by the watch.
/// </summary>
internal sealed class Excursion
{
    public const double ResolveSeconds = 7;
    public const double OffShare = 0.25;
    private const int LeastReadings = 5;
    private const double ArcShare = 0.04;
    private const int EdgesKept = 24;

    private readonly double[] edges = new double[EdgesKept]; // moments of return from off, and of going off, alternating
    private int edgeCount;
    private bool wasOff;
    private bool firstEdgeIsReturn;
    private int offRun;
    private double offSeconds;
    private int longestOffRun;
    private int ups;
    private int downs;
    private int ins;
    private int outInARow;
    private int insInARow;
    private double meanOut;
    private double inBand;
    private double early;
    private double scatter;
    private double previousSeconds;

    public bool Active { get; private set; }
    public int Number { get; set; }
    public double OnsetSeconds { get; private set; }
    public double CrySeconds { get; private set; }
    public double LastOutSeconds { get; private set; }
    public bool HasReturned { get; private set; }

    /// <summary>Out to both sides by more than a mains would move: no dip, no step.</summary>
    public bool LooksLikeArcs => ups > 0 && downs > 0 && ups + downs >= 3;

    public bool IsOff => wasOff;

    /// <summary>Longest stretch without current so far.</summary>
    public double LongestOffSeconds { get; private set; }

    public int Edges => edgeCount;

    /// <summary>Mean departure since the current last left the band, relative; the size of a step.</summary>
    public double Step => meanOut;

    /// <summary>Whether the current has stayed out, on one side, for long enough to be called a step.</summary>
    public bool Stays(double seconds, double patience) =>
        outInARow >= LeastReadings && seconds - CrySeconds >= patience && LastInSeconds <= seconds - patience;

    public double LastInSeconds { get; private set; }

    /// <summary>Mean of the last few departures.</summary>
    public double Latest { get; private set; }

    /// <summary>Rise of the departure since the cry, relative per second.</summary>
    public double ClimbPerSecond => previousSeconds - CrySeconds > 2 ? (Latest - early) / (previousSeconds - CrySeconds) : 0;

    /// <summary>Whether the departure has grown by half since the cry, more than scatter would do: a climb, not a step.</summary>
    public bool Climbs => outInARow >= 6 && early > 0 && Latest > (1.4 * early) + (2 * scatter) && previousSeconds - CrySeconds >= 2;

    public void Begin(double onset, double seconds, double jump, double sd)
    {
        Active = true;
        Number = 0;
        HasReturned = false;
        LongestOffSeconds = offSeconds = 0;
        (OnsetSeconds, CrySeconds, LastOutSeconds, LastInSeconds, previousSeconds) = (onset, seconds, seconds, double.NegativeInfinity, seconds);
        (edgeCount, offRun, longestOffRun, ups, downs, ins, outInARow) = (0, 0, 0, 0, 0, 0, 0);
        meanOut = 0;
        inBand = Math.Max(0.5 * Math.Min(Math.Abs(jump), 0.06), 2.5 * sd);
        wasOff = jump < OffShare - 1;
        if (wasOff)
        {
            // The cry needed two readings: the circuit was off at the one before as well.
            offRun = 1;
            Edge(onset, isReturn: false);
        }

        insInARow = 0;
        (Latest, early, scatter) = (jump, jump, sd);
        Follow(seconds, jump);
    }

    public void End() => Active = false;

    /// <summary>Takes one reading's departure; true if it lay within the healthy band.</summary>
    public bool Follow(double seconds, double jump)
    {
        var off = jump < OffShare - 1;
        if (off != wasOff)
        {
            Edge((previousSeconds + seconds) / 2, isReturn: wasOff);
            wasOff = off;
        }

        offSeconds = off ? offSeconds + seconds - previousSeconds : 0;
        LongestOffSeconds = Math.Max(LongestOffSeconds, offSeconds);
        offRun = off ? offRun + 1 : 0;
        longestOffRun = Math.Max(longestOffRun, offRun);
        previousSeconds = seconds;
        if (Math.Abs(jump) < inBand)
        {
            ins++;
            insInARow++;
            outInARow = 0;
            meanOut = 0;
            LastInSeconds = seconds;
            HasReturned |= insInARow >= 2;
            return true;
        }

        insInARow = 0;
        if (jump * meanOut < 0)
        {
            outInARow = 0;
            meanOut = 0;
        }

        outInARow++;
        Latest += (jump - Latest) * 0.4;
        early += outInARow <= 3 ? (jump - early) / outInARow : 0;
        meanOut += (jump - meanOut) / Math.Min(outInARow, 20);
        LastOutSeconds = seconds;
        if (Math.Abs(jump) > ArcShare)
        {
            (ups, downs) = jump > 0 ? (ups + 1, downs) : (ups, downs + 1);
        }

        return false;
    }

    private void Edge(double seconds, bool isReturn)
    {
        if (edgeCount == 0)
        {
            firstEdgeIsReturn = isReturn;
        }

        if (edgeCount == EdgesKept)
        {
            // Two at a time, so that the order of goings and returns stays.
            edges.AsSpan(2).CopyTo(edges);
            edgeCount -= 2;
        }

        edges[edgeCount++] = seconds;
    }

    /// <summary>Whether going off and coming back is what happens, rather than arcing.</summary>
    public bool LooksCycling => edgeCount >= 2 && longestOffRun >= 2 && (edgeCount < 6 || Scatter < 0.35);

    /// <summary>Period and share of time on, from returns to returns; NaN before two returns.</summary>
    public (double PeriodSeconds, double Duty) Cycle
    {
        get
        {
            var first = firstEdgeIsReturn ? 0 : 1;
            var returns = (edgeCount - first + 1) / 2;
            if (returns < 2)
            {
                // One going, one return: two half-periods are not yet a period; going to going is.
                return edgeCount >= 3 ? (edges[edgeCount - 1] - edges[edgeCount - 3], double.NaN) : (double.NaN, double.NaN);
            }

            var last = first + (2 * (returns - 1));
            var period = (edges[last] - edges[first]) / (returns - 1);
            var on = 0.0;
            for (var i = first; i < last; i += 2)
            {
                on += edges[i + 1] - edges[i];
            }

            return (period, on / (edges[last] - edges[first]));
        }
    }

    /// <summary>Scatter of the periods relative to their mean.</summary>
    private double Scatter
    {
        get
        {
            double sum = 0, squares = 0;
            var n = edgeCount - 2;
            for (var i = 0; i < n; i++)
            {
                var period = edges[i + 2] - edges[i];
                sum += period;
                squares += period * period;
            }

            var mean = sum / n;
            return Math.Sqrt(Math.Max(0, (squares / n) - (mean * mean))) / mean;
        }
    }

    public void Transfer(StateStream state)
    {
        state.Fields(edges);
        state.Field(ref edgeCount);
        state.Field(ref wasOff);
        state.Field(ref firstEdgeIsReturn);
        state.Field(ref offRun);
        state.Field(ref longestOffRun);
        state.Field(ref offSeconds);
        var longestOff = LongestOffSeconds;
        state.Field(ref longestOff);
        LongestOffSeconds = longestOff;
        state.Field(ref ups);
        state.Field(ref downs);
        state.Field(ref ins);
        state.Field(ref outInARow);
        state.Field(ref insInARow);
        state.Field(ref meanOut);
        state.Field(ref inBand);
        state.Field(ref early);
        state.Field(ref scatter);
        var latest = Latest;
        state.Field(ref latest);
        Latest = latest;
        state.Field(ref previousSeconds);
        var (active, number, onset, cry, lastOut, lastIn) = (Active, Number, OnsetSeconds, CrySeconds, LastOutSeconds, LastInSeconds);
        var returned = HasReturned;
        state.Field(ref returned);
        HasReturned = returned;
        state.Field(ref active);
        state.Field(ref number);
        state.Field(ref onset);
        state.Field(ref cry);
        state.Field(ref lastOut);
        state.Field(ref lastIn);
        (Active, Number, OnsetSeconds, CrySeconds, LastOutSeconds, LastInSeconds) = (active, number, onset, cry, lastOut, lastIn);
    }
}
