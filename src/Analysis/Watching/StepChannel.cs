namespace Lampwarden.Analysis.Watching;

/// <summary>
/// Sudden changes, reading by reading: a two-sided CUSUM (Page 1954) of the clipped residual, so that one garbled reading can never raise it,
/// and a short cut of two readings for changes no garbled pair would imitate.
/// </summary>
internal sealed class StepChannel
{
    // In units of the effective sd: allowance, clip and threshold. One clipped reading adds 2, so three in a row are needed and suffice.
    private const double Allowance = 2;
    private const double Clip = 4;
    private const double Threshold = 4.2;
    private const double SureChange = 0.25;

    private double up;
    private double down;
    private double firstUp;
    private double firstDown;
    private int sureInARow;
    private double lastResidual;

    /// <summary>Upward sum began here; the estimated onset of an upward alarm, s.</summary>
    public double OnsetUpSeconds => firstUp;

    /// <summary>As <see cref="OnsetUpSeconds"/>, downward.</summary>
    public double OnsetDownSeconds => firstDown;

    /// <summary>+1 or -1 at the reading that shows a sudden change, else 0.</summary>
    public int Observe(double seconds, double residual, double sd)
    {
        var z = Math.Clamp(residual / sd, -Clip, Clip);
        if (up == 0)
        {
            firstUp = seconds;
        }

        if (down == 0)
        {
            firstDown = seconds;
        }

        up = Math.Max(0, up + z - Allowance);
        down = Math.Max(0, down - z - Allowance);
        var sure = Math.Abs(residual) > SureChange && (sureInARow == 0 || residual * lastResidual > 0);
        sureInARow = sure ? sureInARow + 1 : 0;
        lastResidual = residual;
        if (up > Threshold || (sureInARow >= 2 && residual > 0))
        {
            return 1;
        }

        return down > Threshold || (sureInARow >= 2 && residual < 0) ? -1 : 0;
    }

    /// <summary>True while an excursion is being weighed: nothing may be learned from such readings.</summary>
    public bool InDoubt => up > 0 || down > 0;

    public void Reset()
    {
        up = down = 0;
        sureInARow = 0;
    }

    public void Transfer(StateStream state)
    {
        state.Field(ref up);
        state.Field(ref down);
        state.Field(ref firstUp);
        state.Field(ref firstDown);
        state.Field(ref sureInARow);
        state.Field(ref lastResidual);
    }
}
