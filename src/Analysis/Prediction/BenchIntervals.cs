using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Uncertainty;

namespace Lampwarden.Analysis.Prediction;

/// <summary>
/// The 95 % interval of every number of a prediction. Inputs are moved one at a time (<see cref="Propagation"/>): for the steady state every
/// lamp by itself, for the switch-on equal neighbours together.
/// </summary>
internal sealed class BenchIntervals(BenchInputs inputs, BenchInputs joined, PredictionSettings settings)
{
    private static readonly string[] LampNumbers = ["volts", "amps", "watts", "filamentKelvin", "glow"];

    /// <summary>Fills in all intervals (unless null) and gives the one of the settled reading.</summary>
    /// <param name="healthy">The bench with its unit.</param>
    /// <param name="shorted">The bench with a short.</param>
    /// <param name="shownShare">What the meter shows of the true RMS.</param>
    /// <param name="intervals">Where they go, by JSON path.</param>
    public Interval Fill(BenchState healthy, BenchState shorted, double shownShare, IDictionary<string, Interval>? intervals)
    {
        var reading = FillSteady(healthy, shorted, shownShare, intervals);
        if (intervals is not null)
        {
            FillTransient(healthy, intervals);
            FillPeak(shorted, intervals);
        }

        return reading;
    }

    /// <summary>The settled part of <see cref="Fill"/>.</summary>
    public Interval FillSteady(BenchState healthy, BenchState shorted, double shownShare, IDictionary<string, Interval>? intervals)
    {
        var nominal = healthy.Steady;
        var both = Spread(
            inputs,
            values =>
            {
                var moved = healthy.Evaluator!.At(values);
                return [.. moved, .. shorted.Evaluator!.At(values), moved[SteadyEvaluator.Amps]];
            },
            [.. nominal, .. shorted.Steady, nominal[SteadyEvaluator.Amps]],
            skipTransient: true,
            lastIsLinear: true);
        var reading = Reading(both[^1], nominal[SteadyEvaluator.Amps], shownShare);
        if (intervals is null)
        {
            return reading;
        }

        intervals["steady.lineAmps"] = both[SteadyEvaluator.Amps].Interval;
        intervals["steady.bankVolts"] = both[SteadyEvaluator.BankVolts].Interval;
        intervals["steady.unitVolts"] = both[SteadyEvaluator.UnitVolts].Interval.Within(0, double.MaxValue);
        intervals["steady.unitWatts"] = both[SteadyEvaluator.UnitWatts].Interval.Within(0, double.MaxValue);
        intervals["steady.powerFactor"] = both[SteadyEvaluator.PowerFactor].Interval.Within(0, 1);
        FillLamps("steady", both, 0, healthy, intervals);
        FillShortedSteady(both, nominal.Length, shorted, intervals);
        FillContrast(healthy, shorted, intervals);
        return reading;
    }

    /// <summary>Only what does not need a steady state of the unit.</summary>
    public void FillShorted(BenchState shorted, IDictionary<string, Interval> intervals)
    {
        var spread = Spread(inputs, values => shorted.Evaluator!.At(values), shorted.Steady, skipTransient: true);
        FillShortedSteady(spread, 0, shorted, intervals);
        FillPeak(shorted, intervals);
    }

    private static Propagation[] Spread(BenchInputs inputs, Func<double[], double[]> model, double[] nominal, bool skipTransient, bool lastIsLinear = false)
    {
        var outputs = nominal.Select((value, index) => new Propagation(value, lastIsLinear && index == nominal.Length - 1)).ToArray();
        for (var input = 0; input < inputs.Inputs.Count; input++)
        {
            var uncertain = inputs.Inputs[input];
            if (uncertain.Sigma == 0 || (skipTransient && inputs.IsTransientOnly(input)))
            {
                continue;
            }

            var values = (double[])inputs.Nominal.Clone();
            values[input] = uncertain.Mean + uncertain.Sigma;
            var above = model(values);
            values[input] = uncertain.Mean - uncertain.Sigma;
            var below = model(values);
            for (var output = 0; output < outputs.Length; output++)
            {
                outputs[output].Add(uncertain, above[output], below[output]);
            }
        }

        return outputs;
    }

    // What the meter shows: the current, and the meter's own bound as a rectangle (JCGM 100, 4.3.7).
    private Interval Reading(Propagation amps, double nominalAmps, double shownShare)
    {
        var bound = settings.Meter.BoundAmps(nominalAmps * shownShare) / shownShare;
        amps.Add(UncertainInput.Between("meter", 0, -bound, bound), nominalAmps + bound / Math.Sqrt(3), nominalAmps - bound / Math.Sqrt(3));
        var interval = amps.Interval;
        return new Interval(interval.Low * shownShare, interval.High * shownShare);
    }

    private static void FillLamps(string part, Propagation[] spread, int offset, BenchState state, IDictionary<string, Interval> intervals)
    {
        var count = state.Lamps().Count;
        for (var lamp = 0; lamp < count; lamp++)
        {
            for (var number = 0; number < LampNumbers.Length; number++)
            {
                var interval = spread[offset + SteadyEvaluator.FirstLamp + SteadyEvaluator.PerLamp * lamp + number].Interval;
                intervals[$"{part}.lamps[{lamp}].{LampNumbers[number]}"] = interval.Within(0, double.MaxValue);
            }
        }
    }

    private void FillShortedSteady(Propagation[] spread, int offset, BenchState shorted, IDictionary<string, Interval> intervals)
    {
        intervals["shorted.lineAmps"] = spread[offset + SteadyEvaluator.Amps].Interval;
        FillLamps("shorted", spread, offset, shorted, intervals);
        var cold = Spread(inputs, values => [ColdOhms(inputs.BankOf(values).Root, inputs.RoomKelvin(values))], [ColdOhms(inputs.BankOf(inputs.Nominal).Root, inputs.RoomKelvin(inputs.Nominal))], skipTransient: false);
        intervals["bank.coldOhms"] = cold[0].Interval;
    }

    private void FillContrast(BenchState healthy, BenchState shorted, IDictionary<string, Interval> intervals)
    {
        double Ratio(double[] values) => shorted.Evaluator!.At(values)[0] / healthy.Evaluator!.At(values)[0];
        intervals["contrast"] = Spread(inputs, values => [Ratio(values)], [Ratio(inputs.Nominal)], skipTransient: true)[0].Interval;
    }

    private void FillTransient(BenchState healthy, IDictionary<string, Interval> intervals)
    {
        var horizon = healthy.Transients.Horizon(healthy.Transient, healthy.Point.Amps);
        var spread = Spread(joined, Numbers, healthy.TransientNumbers, skipTransient: false);
        intervals["inrush.peakAmps"] = spread[TransientEvaluator.Peak].Interval;
        intervals["inrush.firstCycleRmsAmps"] = spread[TransientEvaluator.FirstCycle].Interval;
        intervals["inrush.settleSeconds"] = spread[TransientEvaluator.Settle].Interval.Within(0, double.MaxValue);

        // From the least that a window of unlucky alignment shows to the most that an aligned one does.
        var meter = settings.Meter.BoundAmps(healthy.TransientNumbers[TransientEvaluator.FirstReading]);
        intervals["inrush.firstReadingAmps"] = new Interval(
            Math.Max(0, spread[TransientEvaluator.LeastFirstReading].Interval.Low - meter), spread[TransientEvaluator.FirstReading].Interval.High + meter);
        for (var lamp = 0; lamp < healthy.TransientNumbers.Length - TransientEvaluator.FirstLamp; lamp++)
        {
            intervals[$"steady.lamps[{lamp}].firstGlowSeconds"] = spread[TransientEvaluator.FirstLamp + lamp].Interval.Within(0, double.MaxValue);
        }

        double[] Numbers(double[] values)
        {
            var steadyAmps = healthy.JoinedEvaluator!.At(values)[SteadyEvaluator.Amps];
            return healthy.Transients.Numbers(healthy.Transients.Run(values, steadyAmps, horizon), steadyAmps);
        }
    }

    /// <summary>The peak of the shorted bank.</summary>
    public void FillPeak(BenchState shorted, IDictionary<string, Interval> intervals) =>
        intervals["shorted.peakAmps"] = Spread(joined, values => [shorted.Transients.PeakAmps(values)], [shorted.TransientNumbers[TransientEvaluator.Peak]], skipTransient: false)[0].Interval;

    private static double ColdOhms(BankPart part, double kelvin) => part switch
    {
        LampPart leaf => leaf.Lamp.Filament?.Ohms(kelvin) ?? leaf.Lamp.ColdOhms,
        SeriesPart series => series.Parts.Sum(inner => ColdOhms(inner, kelvin)),
        ParallelPart parallel => 1 / parallel.Parts.Sum(inner => 1 / ColdOhms(inner, kelvin)),
        _ => double.NaN,
    };
}
