namespace Lampwarden.Analysis.Watching;

/// <summary>What is wrong with the meter rather than the unit: silent, overloaded, stuck.</summary>
internal sealed class MeterTrouble(WatchSettings settings, FindingBook book)
{
    private const double LeastSilenceSeconds = 2;
    private const int OverloadsToRaise = 2;
    private const int GoodToClear = 3;

    private readonly List<WatchGap> gaps = [];
    private double lastGoodSeconds = double.NaN;
    private bool inGap;
    private bool gapIsOverload;
    private int overloads;
    private int goodInARow;
    private int silent;
    private int overloaded;
    private double gapSeconds;

    public IReadOnlyList<WatchGap> Gaps => gaps;

    /// <summary>All time without readings so far, s.</summary>
    public double GapSeconds => gapSeconds;

    /// <summary>A meter that says nothing for this long is silent: three readings, at least two seconds (common practice, no published source).</summary>
    public double SilenceSeconds => Math.Max(3 / settings.ReadingsPerSecond, LeastSilenceSeconds);

    public void Observe(in Observation o)
    {
        var since = double.IsNaN(lastGoodSeconds) ? o.Seconds : o.Seconds - lastGoodSeconds;
        if (o.IsOverload)
        {
            overloads++;
            gapIsOverload = true;
            if (overloads == OverloadsToRaise && !book.Stands(overloaded))
            {
                overloaded = book.Raise(Signature.MeterOverload, Severity.Critical, o.Seconds - since, o.Seconds, Advice.Overload, new() { ["sinceSeconds"] = since });
            }
        }
        else
        {
            overloads = 0;
        }

        if (o.IsGap || o.IsOverload)
        {
            inGap = true;
            goodInARow = 0;
            if (o.IsGap && since > SilenceSeconds)
            {
                RaiseSilence(o.Seconds, since);
            }

            return;
        }

        if (inGap || since > SilenceSeconds)
        {
            if (since > SilenceSeconds && !gapIsOverload)
            {
                RaiseSilence(o.Seconds, since);
            }

            gaps.Add(new WatchGap(double.IsNaN(lastGoodSeconds) ? 0 : lastGoodSeconds, o.Seconds, gapIsOverload ? "overload" : "silent"));
            gapSeconds += since;
            inGap = false;
            gapIsOverload = false;
        }

        lastGoodSeconds = o.Seconds;
        if (book.Stands(silent))
        {
            book.Clear(silent, o.Seconds);
        }

        if (++goodInARow >= GoodToClear && book.Stands(overloaded))
        {
            book.Clear(overloaded, o.Seconds);
        }
    }

    /// <summary>The part of an unfinished gap up to <paramref name="endSeconds"/>.</summary>
    public double OpenGapSeconds(double endSeconds)
    {
        var since = endSeconds - (double.IsNaN(lastGoodSeconds) ? 0 : lastGoodSeconds);
        return inGap || since > SilenceSeconds ? Math.Max(0, since) : 0;
    }

    private void RaiseSilence(double now, double since)
    {
        if (!book.Stands(silent))
        {
            silent = book.Raise(Signature.MeterSilent, Severity.Critical, now - since, now, Advice.Silent(since), new() { ["silentSeconds"] = since });
        }
    }

    public void Transfer(StateStream state)
    {
        state.Field(ref lastGoodSeconds);
        state.Field(ref inGap);
        state.Field(ref gapIsOverload);
        state.Field(ref overloads);
        state.Field(ref goodInARow);
        state.Field(ref silent);
        state.Field(ref overloaded);
        state.Field(ref gapSeconds);
        var count = gaps.Count;
        state.Field(ref count);
        for (var i = 0; i < count; i++)
        {
            var (from, to, reason) = state.Reading ? new WatchGap(0, 0, "") : gaps[i];
            state.Field(ref from);
            state.Field(ref to);
            state.Field(ref reason);
            if (state.Reading)
            {
                gaps.Add(new WatchGap(from, to, reason));
            }
        }
    }
}
