namespace Lampwarden.Analysis.Watching;

/// <summary>What is watched beside the unit: the start, the meter, and how limits are carried to the present mains.</summary>
public sealed partial class Watch
{
    /// <summary>Whether a standing finding already says what a limit would: an excursion being followed, or a step to this very level.</summary>
    private bool Covered(in Observation o) =>
        (excursion.Active && excursion.Number > 0)
        || (book.Stands(stepFinding) && Math.Abs(o.LineAmps - book[stepFinding].Evidence["lineAmps"]) < 0.1 * o.LineAmps + 0.01 * expectation!.SteadyAmps);

    /// <summary>A current that takes seconds where prediction says tenths: a start-up that hesitates.</summary>
    private void WatchInrush(in Observation o)
    {
        if (!inrush.Observe(o.Seconds - firstSeconds, o.LineAmps) || expectation is not { SettleSeconds: > 0 } expected)
        {
            return;
        }

        var settled = inrush.SettledSeconds;
        if (settled > Math.Max(SlowInrushSeconds, SlowInrushTimes * expected.SettleSeconds))
        {
            book.Raise(Signature.SlowInrush, Severity.Warning, firstSeconds, o.Seconds, Advice.SlowInrush(settled, expected.SettleSeconds), new()
            {
                ["settledSeconds"] = settled,
                ["predictedSettleSeconds"] = expected.SettleSeconds,
                ["lineAmps"] = o.LineAmps,
            });
        }
    }

    private void WatchStuck(in Observation o, double foretoldAmps)
    {
        if (stuck.Observe(o.Seconds, o.LineAmps, foretoldAmps, noise))
        {
            if (!book.Stands(stuckFinding))
            {
                stuckFinding = book.Raise(Signature.MeterStuck, Severity.Critical, stuck.SinceSeconds, o.Seconds, Advice.Stuck(o.LineAmps, o.Seconds - stuck.SinceSeconds), new()
                {
                    ["lineAmps"] = o.LineAmps,
                    ["equalReadings"] = stuck.Repeats + 1,
                    ["stuckSeconds"] = o.Seconds - stuck.SinceSeconds,
                });
            }
        }
        else if (stuck.Changes >= 3 && book.Stands(stuckFinding))
        {
            book.Clear(stuckFinding, o.Seconds);
        }
    }

    private double MainsScale(in Observation o)
    {
        if (!settings.MainsMeasured || !(o.MainsVolts > 0))
        {
            return 1;
        }

        var exponent = expectation is { } expected && double.IsFinite(expected.MainsExponent) ? expected.MainsExponent : 0.6;
        return Math.Pow(o.MainsVolts / settings.NominalMainsVolts, exponent);
    }
}
