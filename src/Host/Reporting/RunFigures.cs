using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Reporting;

/// <summary>
/// What a run looked like in a few numbers, from its readings alone. Currents in A, times in s; NaN where the run is too
/// short or too empty to say. Used by the report, by comparisons and by reference units.
/// </summary>
/// <param name="StartSeconds">The first entry: 0 or nearly, but for a run that carries on another, whose clock it keeps.</param>
/// <param name="FirstAmps">The first reading after switch-on; NaN where the run does not reach back to it.</param>
/// <param name="PeakAmps">Largest reading of the first minute; positive infinity where the meter was overloaded then.</param>
/// <param name="SteadyAmps">Median of the run's bucket means: the level it spent most of its time at.</param>
/// <param name="SettleSeconds">From when on readings stay within 10 % of <paramref name="SteadyAmps"/> for at least 5 s.</param>
/// <param name="SettledAmps">Mean over the first ten minutes after that, or over the first tenth of a short run.</param>
/// <param name="EndAmps">Mean over the last ten minutes, or over the last tenth of a short run.</param>
/// <param name="DriftAmpsPerHour">Straight line through the bucket means after settling.</param>
/// <param name="NoiseAmps">Standard deviation of a reading about its neighbours (from successive differences).</param>
/// <param name="MainsVolts">Mean of measured mains; NaN without it.</param>
public sealed record RunFigures(
    double StartSeconds,
    double FirstAmps,
    double PeakAmps,
    double SteadyAmps,
    double SettleSeconds,
    double SettledAmps,
    double EndAmps,
    double LeastAmps,
    double MostAmps,
    double DriftAmpsPerHour,
    double NoiseAmps,
    double MainsVolts,
    double EndMainsVolts,
    double LengthSeconds,
    long Readings)
{
    /// <summary>Whether the run reaches back to the switch-on.</summary>
    public bool HasSwitchOn => StartSeconds < PeakWithinSeconds;

    private const double PeakWithinSeconds = 60;
    private const double SettledWithin = 0.10;
    private const double SettledForSeconds = 5;

    /// <summary>Works the figures out.</summary>
    /// <exception cref="StoreException">There is no such run, or its readings are damaged.</exception>
    public static RunFigures Of(SoakStore store, string run)
    {
        var window = store.Window(run, mostBuckets: 500);
        var filled = window.Buckets.Where(bucket => bucket.Count > 0).ToList();
        if (filled.Count == 0)
        {
            return new RunFigures(0, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, 0, 0);
        }

        var steady = Median(filled.Select(bucket => bucket.MeanAmps));
        var start = new StartOfRun(steady);
        foreach (var reading in store.Readings(run))
        {
            start.Add(reading);
        }

        var length = start.LastSeconds;
        var part = Math.Min(600, (length - start.StartSeconds) / 10);
        var settledFrom = double.IsNaN(start.SettleSeconds) ? double.PositiveInfinity : start.SettleSeconds;
        return new RunFigures(
            start.StartSeconds, start.FirstAmps, start.PeakAmps, steady, start.StartSeconds < PeakWithinSeconds ? start.SettleSeconds : double.NaN,
            Mean(store, run, settledFrom, settledFrom + part).Amps, Mean(store, run, length - part, length).Amps,
            filled.Min(bucket => bucket.MinAmps), filled.Max(bucket => bucket.MaxAmps),
            Slope([.. filled.Where(bucket => bucket.FromSeconds >= settledFrom)]), start.NoiseAmps,
            Mean(store, run, 0, length).Volts, Mean(store, run, length - part, length).Volts, length, filled.Sum(bucket => (long)bucket.Count));
    }

    private static (double Amps, double Volts) Mean(SoakStore store, string run, double from, double to)
    {
        var (amps, volts, countAmps, countVolts) = (0.0, 0.0, 0L, 0L);
        foreach (var reading in double.IsInfinity(from) ? [] : store.Readings(run, Math.Max(0, from), to))
        {
            if (double.IsFinite(reading.Amps))
            {
                amps += reading.Amps;
                countAmps++;
            }

            if (double.IsFinite(reading.MainsVolts))
            {
                volts += reading.MainsVolts;
                countVolts++;
            }
        }

        return (countAmps == 0 ? double.NaN : amps / countAmps, countVolts == 0 ? double.NaN : volts / countVolts);
    }

    private static double Median(IEnumerable<double> values)
    {
        var sorted = values.Order().ToArray();
        return sorted.Length % 2 == 1 ? sorted[sorted.Length / 2] : (sorted[(sorted.Length / 2) - 1] + sorted[sorted.Length / 2]) / 2;
    }

    // Least squares; hours, so that the slope has the size people think in.
    private static double Slope(Bucket[] buckets)
    {
        if (buckets.Length < 3)
        {
            return double.NaN;
        }

        var meanHours = buckets.Average(bucket => bucket.FromSeconds) / 3600;
        var meanAmps = buckets.Average(bucket => bucket.MeanAmps);
        var (up, down) = (0.0, 0.0);
        foreach (var bucket in buckets)
        {
            var hours = (bucket.FromSeconds / 3600) - meanHours;
            up += hours * (bucket.MeanAmps - meanAmps);
            down += hours * hours;
        }

        return up / down;
    }

    private sealed class StartOfRun(double steady)
    {
        private double _closeSince = double.NaN;
        private double _last = double.NaN;
        private double _squares;
        private long _differences;

        public double StartSeconds { get; private set; } = double.NaN;

        public double FirstAmps { get; private set; } = double.NaN;

        public double PeakAmps { get; private set; } = double.NaN;

        public double SettleSeconds { get; private set; } = double.NaN;

        public double LastSeconds { get; private set; }

        public double NoiseAmps => _differences < 10 ? double.NaN : Math.Sqrt(_squares / (2 * _differences));

        public void Add(in LineReading reading)
        {
            LastSeconds = reading.Seconds;
            StartSeconds = double.IsNaN(StartSeconds) ? reading.Seconds : StartSeconds;
            if (reading.IsMissing)
            {
                _last = double.NaN;
                return;
            }

            FirstAmps = double.IsNaN(FirstAmps) && reading.Seconds <= PeakWithinSeconds ? reading.Amps : FirstAmps;
            if (reading.Seconds <= PeakWithinSeconds && !(reading.Amps <= PeakAmps))
            {
                PeakAmps = reading.Amps;
            }

            if (double.IsFinite(reading.Amps) && double.IsFinite(_last) && !double.IsNaN(SettleSeconds))
            {
                _squares += (reading.Amps - _last) * (reading.Amps - _last);
                _differences++;
            }

            _last = reading.Amps;
            if (double.IsNaN(SettleSeconds))
            {
                var close = Math.Abs(reading.Amps - steady) <= SettledWithin * steady;
                _closeSince = !close ? double.NaN : double.IsNaN(_closeSince) ? reading.Seconds : _closeSince;
                SettleSeconds = reading.Seconds - _closeSince >= SettledForSeconds ? _closeSince : double.NaN;
            }
        }
    }
}
