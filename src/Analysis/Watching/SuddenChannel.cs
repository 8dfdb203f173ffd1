namespace Lampwarden.Analysis.Watching;

/// <summary>What one reading looked like to the sudden channel.</summary>
internal enum SuddenCry
{
    Nothing,
    Up,
    Down,

    /// <summary>Outliers of no one direction, close together or too many: contact trouble.</summary>
    Burst,
}

/// <summary>
/// Sudden changes, reading by reading, on the relative residual with the meter's own filter undone: a two-sided CUSUM (Page 1954) of the
/// clipped residual, a short cut of two readings for changes that no garbled pair would imitate, and a score of stray readings. One garbled
/// reading alone can never raise anything.
/// </summary>
internal sealed class SuddenChannel
{
    // In units of the effective sd. One clipped reading adds Clip - Allowance = 2.2, so three in a row are needed and suffice: even heavy-tailed
    // noise (Student t, 5 degrees) puts three in a row beyond 4 sd less than once in 10,000 hours at 2 readings a second.
    private const double Allowance = 2;
    private const double Clip = 4.2;
    private const double Threshold = 6.2;

    // A reading this far out is an outlier: 12 sd keeps heavy-tailed meter noise (Student t, 5 degrees) below one in ten hours.
    private const double OutlierShare = 0.04, OutlierSds = 12;
    private const double SureShare = 0.08;
    private const double PairSeconds = 2.5;

    // Beyond this a wrong pole cannot have made the departure up.
    private const double LargeShare = 0.3;

    // Strays: a garbled reading comes 0.1 to 0.3 times an hour, an arc at least 0.2 times a minute. Three within some ten minutes are arcs.
    private const double StrayLeakSeconds = 400, StraysToRaise = 2.4;

    private Cusum up;
    private Cusum down;
    private double strays;
    private double firstUp;
    private double firstDown;
    private double lastOutlierSeconds = double.NegativeInfinity;
    private double lastJump;
    private double previousAmps = double.NaN;
    private double previousForetold = double.NaN;
    private double previousSeconds;
    private bool previousOutlier;

    /// <summary>The last reading's departure from the foretold, filter undone, relative.</summary>
    public double Jump { get; private set; }

    public bool Outlier { get; private set; }

    public double OnsetUpSeconds => firstUp;

    public double OnsetDownSeconds => firstDown;

    public double StrayScore => strays;

    /// <summary>True while an excursion is being weighed: nothing may be learned from such readings.</summary>
    public bool InDoubt => Outlier || up.Sum > 0.5 || down.Sum > 0.5;

    /// <param name="seconds">Time of the reading.</param>
    /// <param name="amps">What was shown.</param>
    /// <param name="foretold">What a healthy unit would show through an ideal meter.</param>
    /// <param name="offset">What a local trend explains of the departure, relative.</param>
    /// <param name="sd">Effective sd of one reading, relative.</param>
    /// <param name="extra">Allowance for a restless mains, relative.</param>
    /// <param name="pole">The meter's pole.</param>
    /// <param name="poleDoubtful">Whether the pole may be an artefact, of coarse counts or of an unmeasured mains' flicker.</param>
    public SuddenCry Observe(double seconds, double amps, double foretold, double offset, double sd, double extra, double pole, bool poleDoubtful)
    {
        Jump = Undo(amps, foretold, pole) - offset;
        if (poleDoubtful && Math.Abs(Jump) < LargeShare)
        {
            // With and without the filter undone, the lesser departure counts.
            var shown = (amps / foretold) - 1 - offset;
            Jump = Jump * shown <= 0 ? 0 : Math.Abs(shown) < Math.Abs(Jump) ? shown : Jump;
        }

        strays *= Math.Exp(-(seconds - previousSeconds) / StrayLeakSeconds);
        var fast = previousSeconds;
        (previousAmps, previousForetold, previousSeconds) = (amps, foretold, seconds);

        // An unlucky start must not point before the last quiet reading.
        firstUp = up.Count == 0 ? (fast + seconds) / 2 : firstUp;
        firstDown = down.Count == 0 ? (fast + seconds) / 2 : firstDown;
        var z = Math.Clamp(Jump / sd, -Clip, Clip);
        var allowance = Allowance + (extra / sd);
        up.Add(z, allowance);
        down.Add(-z, allowance);
        var size = Math.Abs(Jump) - extra;
        Outlier = size > Math.Max(OutlierShare, OutlierSds * sd);
        var cry = Outlier ? WeighOutlier(seconds, size, sd) : SuddenCry.Nothing;
        lastJump = Jump;
        previousOutlier = Outlier;
        return cry != SuddenCry.Nothing ? cry : up.Sum > Threshold ? SuddenCry.Up : down.Sum > Threshold ? SuddenCry.Down : SuddenCry.Nothing;
    }

    private SuddenCry WeighOutlier(double seconds, double size, double sd)
    {
        var pair = seconds - lastOutlierSeconds <= PairSeconds;
        lastOutlierSeconds = seconds;
        if (pair && previousOutlier && Jump * lastJump > 0)
        {
            return size > Math.Max(SureShare, OutlierSds * sd) ? Jump > 0 ? SuddenCry.Up : SuddenCry.Down : SuddenCry.Nothing;
        }

        strays += 1;
        return pair || strays > StraysToRaise ? SuddenCry.Burst : SuddenCry.Nothing;
    }

    /// <summary>
    /// Undoes the meter's one-pole filter. After an outlier there are two readings of the past: the unit moved (the filter remembers it) or
    /// the display was garbled (it does not); the one that leaves less to explain is taken.
    /// </summary>
    private double Undo(double amps, double foretold, double pole)
    {
        if (pole == 0 || double.IsNaN(previousAmps))
        {
            return (amps / foretold) - 1;
        }

        var moved = ((amps - (pole * previousAmps)) / ((1 - pole) * foretold)) - 1;
        if (!previousOutlier)
        {
            return moved;
        }

        var garbled = ((amps - (pole * previousForetold)) / ((1 - pole) * foretold)) - 1;
        return Math.Abs(garbled) < Math.Abs(moved) ? garbled : moved;
    }

    /// <summary>A gap: the next reading has no neighbour.</summary>
    public void Skip() => previousAmps = double.NaN;

    /// <summary>The strays were the unit's own switching.</summary>
    public void ForgetStrays() => strays = 0;

    public void Reset()
    {
        up.Start(0);
        down.Start(0);
        Outlier = previousOutlier = false;
        lastOutlierSeconds = double.NegativeInfinity;
    }

    public void Transfer(StateStream state)
    {
        up.Transfer(state);
        down.Transfer(state);
        state.Field(ref strays);
        state.Field(ref firstUp);
        state.Field(ref firstDown);
        state.Field(ref lastOutlierSeconds);
        state.Field(ref lastJump);
        state.Field(ref previousAmps);
        state.Field(ref previousForetold);
        state.Field(ref previousSeconds);
        state.Field(ref previousOutlier);
        var (jump, outlier) = (Jump, Outlier);
        state.Field(ref jump);
        state.Field(ref outlier);
        (Jump, Outlier) = (jump, outlier);
    }
}
