namespace Lampwarden.Analysis.Watching;

/// <summary>The measured mains as the watch sees it: in logs, filtered as the current meter filters, with a measure of its present unrest.</summary>
internal sealed class MainsView(double nominalVolts)
{
    private const double ShortSeconds = 30, LongSeconds = 300, UnrestSeconds = 3;
    private const double NewMainsSeconds = 600;

    private const double LeastReadings = 20, MostReadings = 2000, ClipSds = 4;

    private double shortMean = double.NaN;
    private double longMean;
    private double lastSeconds;
    private int awayInARow;
    private double awaySince = double.NaN;
    private double heardSeconds = double.NaN;
    private double previous = double.NaN;
    private double beforePrevious = double.NaN;
    private double firstSquares;
    private double secondSquares;
    private double heard;
    private double held = 1;
    private double sinceHeard;

    /// <summary>ln(V / nominal) of the last reading.</summary>
    public double Now { get; private set; }

    /// <summary>The same through the current meter's filter.</summary>
    public double Filtered { get; private set; }

    /// <summary>Largest recent departure from the mean of half a minute; fades in seconds.</summary>
    public double Unrest { get; private set; }

    /// <summary>Departure from the mean of some minutes: what a dip or a swell is measured by.</summary>
    public double Departure => Now - longMean;

    /// <summary>How long its meter has said nothing since it last spoke, s; NaN where it never did.</summary>
    public double SilentSeconds => lastSeconds - heardSeconds;

    /// <summary>When it last read otherwise than before: a slower meter than that of the current gives one reading with several of those.</summary>
    public double ChangedSeconds { get; private set; }

    /// <summary>How long it has stood away so, s; 0 where it does not.</summary>
    public double AwaySeconds => double.IsNaN(awaySince) ? 0 : Math.Max(lastSeconds - awaySince, 1e-3);

    /// <summary>
    /// Variance of the mains meter's own noise for each reading of the line meter, relative: several of those may share one of the mains.
    /// 0 until known.
    /// </summary>
    // Of white noise (variance n) on a random walk (q a step), first differences have 2n + q, second ones 6n + 2q: what they tell apart is n.
    public double NoiseVariance => heard < LeastReadings ? 0 : Math.Max(0, (secondSquares / 2) - firstSquares) * held;

    /// <summary>Readings in a row for which the mains has stood away by more than a dip's share.</summary>
    public int AwayInARow => awayInARow;

    public void Observe(double seconds, double volts, double pole)
    {
        if (volts > 0 && double.IsFinite(volts))
        {
            Now = Math.Log(volts / nominalVolts);
            heardSeconds = seconds;
            LearnNoise(seconds);
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
        if (!away)
        {
            longMean += (Now - longMean) * (1 - Math.Exp(-dt / LongSeconds));
        }
        else if (seconds - awaySince > NewMainsSeconds)
        {
            (longMean, awayInARow, awaySince) = (shortMean, 0, double.NaN);
        }
    }

    private void LearnNoise(double seconds)
    {
        sinceHeard++;
        if (Now == previous)
        {
            return; // the same reading, given with another of the current
        }

        ChangedSeconds = seconds;

        var share = 1 / Math.Min(heard + 1, MostReadings);
        held += (sinceHeard - held) * share;
        sinceHeard = 0;
        if (!double.IsNaN(beforePrevious))
        {
            Average(ref firstSquares, Now - previous, share);
            Average(ref secondSquares, Now - (2 * previous) + beforePrevious, share);
            heard++;
        }

        (beforePrevious, previous) = (previous, Now);
    }

    private void Average(ref double squares, double difference, double share)
    {
        // A step of the mains is no noise of its meter.
        var square = difference * difference;
        squares += ((heard < LeastReadings ? square : Math.Min(square, ClipSds * ClipSds * squares)) - squares) * share;
    }

    public void Transfer(StateStream state)
    {
        state.Field(ref shortMean);
        state.Field(ref longMean);
        state.Field(ref lastSeconds);
        state.Field(ref awayInARow);
        state.Field(ref awaySince);
        state.Field(ref heardSeconds);
        var changed = ChangedSeconds;
        state.Field(ref changed);
        ChangedSeconds = changed;
        state.Field(ref previous);
        state.Field(ref beforePrevious);
        state.Field(ref firstSquares);
        state.Field(ref secondSquares);
        state.Field(ref heard);
        state.Field(ref held);
        state.Field(ref sinceHeard);
        var (now, filtered, unrest) = (Now, Filtered, Unrest);
        state.Field(ref now);
        state.Field(ref filtered);
        state.Field(ref unrest);
        (Now, Filtered, Unrest) = (now, filtered, unrest);
    }
}
