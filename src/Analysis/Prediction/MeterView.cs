namespace Lampwarden.Analysis.Prediction;

/// <summary>What a meter shows of a current given step by step.</summary>
internal static class MeterView
{
    // A mean-responding meter is scaled to be right for a sinusoid: RMS over rectified mean.
    internal const double FormFactor = Math.PI / (2 * 1.4142135623730951);

    private const int Alignments = 16;

    /// <summary>The reading of a window: steps from first to first + count, ends included at half weight.</summary>
    public static double Window(IReadOnlyList<double> amps, int first, int count, PredictedMeter meter)
    {
        double squares = 0, sum = 0;
        for (var index = 0; index <= count; index++)
        {
            var weight = index == 0 || index == count ? 0.5 : 1;
            squares += weight * amps[first + index] * amps[first + index];
            sum += weight * amps[first + index];
        }

        var removed = meter.Coupling == MeterCoupling.Ac ? sum / count : 0;
        if (meter.Response != MeterResponse.MeanResponding)
        {
            return Math.Sqrt(Math.Max(0, squares / count - removed * removed));
        }

        var rectified = 0.0;
        for (var index = 0; index <= count; index++)
        {
            rectified += (index == 0 || index == count ? 0.5 : 1) * Math.Abs(amps[first + index] - removed);
        }

        return FormFactor * rectified / count;
    }

    /// <summary>Readings one after the other, the first window beginning with the switch-on; for a converter, its output at those times.</summary>
    public static IReadOnlyList<(double Seconds, double Amps)> Readings(IReadOnlyList<double> amps, double stepSeconds, PredictedMeter meter, double delaySeconds = 0)
    {
        var readings = new List<(double, double)>();
        var count = Math.Max(1, (int)Math.Round(meter.WindowSeconds / stepSeconds));
        if (meter.Response == MeterResponse.FirstOrder)
        {
            double square = 0, mean = 0;
            for (var index = 1; index < amps.Count; index++)
            {
                // An AC-coupled converter loses the mean through a far slower coupling.
                mean += (amps[index] - mean) * stepSeconds / (10 * meter.WindowSeconds);
                var seen = meter.Coupling == MeterCoupling.Ac ? amps[index] - mean : amps[index];
                square += (seen * seen - square) * stepSeconds / meter.WindowSeconds;
                if (index % count == 0)
                {
                    readings.Add((index * stepSeconds, meter.Display(Math.Sqrt(square))));
                }
            }

            return readings;
        }

        // A window begun before the switch-on holds the current of its later part only.
        var lead = (int)Math.Round(delaySeconds / stepSeconds) % count;
        if (lead > 0 && lead < amps.Count)
        {
            readings.Add((lead * stepSeconds, meter.Display(Window(amps, 0, lead, meter) * Math.Sqrt(lead / (double)count))));
        }

        for (var first = lead; first + count < amps.Count; first += count)
        {
            readings.Add(((first + count) * stepSeconds, meter.Display(Window(amps, first, count, meter))));
        }

        return readings;
    }

    /// <summary>
    /// The first reading with the window aligned to the switch-on, and the least value that the larger of the first two readings can take
    /// when it is not.
    /// </summary>
    public static (double Aligned, double Least) First(SwitchOn run, PredictedMeter meter)
    {
        var exact = meter with { CountSize = 0, RangeAmps = double.PositiveInfinity };
        var aligned = Readings(run.Amps, run.StepSeconds, exact);
        if (aligned.Count == 0)
        {
            return (double.NaN, double.NaN);
        }

        if (meter.Response == MeterResponse.FirstOrder)
        {
            return (aligned[0].Amps, aligned[0].Amps);
        }

        var least = aligned[0].Amps;
        for (var part = 1; part < Alignments; part++)
        {
            var shifted = Readings(run.Amps, run.StepSeconds, exact, meter.WindowSeconds * part / Alignments);
            if (shifted.Count > 1)
            {
                least = Math.Min(least, Math.Max(shifted[0].Amps, shifted[1].Amps));
            }
        }

        return (aligned[0].Amps, least);
    }

    /// <summary>What the meter shows of a settled current, relative to its true RMS.</summary>
    public static double SettledShare(in Units.UnitPoint point, PredictedMeter meter)
    {
        if (!(point.Amps > 0))
        {
            return 1;
        }

        var direct = meter.Coupling == MeterCoupling.Ac ? point.DirectAmps : 0;
        return meter.Response == MeterResponse.MeanResponding
            ? FormFactor * (meter.Coupling == MeterCoupling.Ac ? point.MeanDeviationAmps : point.MeanAbsoluteAmps) / point.Amps
            : Math.Sqrt(Math.Max(0, 1 - direct * direct / (point.Amps * point.Amps)));
    }
}
