namespace Lampwarden.Analysis.Watching;

/// <summary>The measured mains as the watch sees it: in logs, filtered as the current meter filters, with a measure of its present unrest.</summary>
internal sealed class MainsView(double nominalVolts)
{
    private const double ShortSeconds = 30, LongSeconds = 300, UnrestSeconds = 3;

    private double shortMean = double.NaN;
    private double longMean;
    private double lastSeconds;
    private int awayInARow;
    private double awaySince = double.NaN;

    /// <summary>ln(V / nominal) of the last reading.</summary>
    public double Now { get; private set; }

    /// <summary>The same through the current meter's filter.</summary>
    public double Filtered { get; private set; }

    /// <summary>Largest recent departure from the mean of half a minute; fades in seconds.</summary>
    public double Unrest { get; private set; }

    /// <summary>Departure from the mean of some minutes: what a dip or a swell is measured by.</summary>
    public double Departure => Now - longMean;

    /// <summary>Readings in a row for which the mains has stood away by more than a dip's share.</summary>
    public int AwayInARow => awayInARow;

    public void Observe(double seconds, double volts, double pole)
    {
        if (volts > 0 && double.IsFinite(volts))
        {
            Now = Math.Log(volts / nominalVolts);
        }

        if (double.IsNaN(shortMean))
        {
            (shortMean, longMean, Filtered, lastSeconds) = (Now, Now, Now, seconds);
        }

        var dt = seconds - lastSeconds;
        lastSeconds = seconds;
        Filtered = dt > 10 ? Now : (pole * Filtered) + ((1 - pole) * Now);
        Unrest = Math.Max(Math.Abs(Now - shortMean), Unrest * Math.Exp(-dt / UnrestSeconds));
        shortMean += (Now - shortMean) * (1 - Math.Exp(-dt / ShortSeconds));
        var away = Math.Abs(Departure) > 0.04;
        awayInARow = away ? awayInARow + 1 : 0;
        awaySince = !away ? double.NaN : double.IsNaN(awaySince) ? seconds : awaySince;

        // A dip must not become the measure of itself; after ten minutes it is no dip but a new mains.
        if (!away || seconds - awaySince > 600)
        {
            longMean += (Now - longMean) * (1 - Math.Exp(-dt / LongSeconds));
        }
    }

    public void Transfer(StateStream state)
    {
        state.Field(ref shortMean);
        state.Field(ref longMean);
        state.Field(ref lastSeconds);
        state.Field(ref awayInARow);
        state.Field(ref awaySince);
        var (now, filtered, unrest) = (Now, Filtered, Unrest);
        state.Field(ref now);
        state.Field(ref filtered);
        state.Field(ref unrest);
        (Now, Filtered, Unrest) = (now, filtered, unrest);
    }
}
