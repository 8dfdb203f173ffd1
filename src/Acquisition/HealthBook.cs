namespace Lampwarden.Acquisition;

/// <summary>Keeps the counts behind <see cref="MeterHealth"/>. Thread-safe: written by the session's tasks, read by anybody.</summary>
internal sealed class HealthBook
{
    private const int Window = 64;
    private const int MostProblems = 20;
    private readonly Lock _gate = new();
    private readonly long[] _gaps = new long[Enum.GetValues<GapReason>().Length];
    private readonly long[] _refused = new long[Enum.GetValues<GapReason>().Length];
    private readonly double[] _intervals = new double[Window];
    private readonly double[] _latencies = new double[Window];
    private readonly List<string> _problems = [];
    private string? _identity;
    private bool _connected;
    private int _openings;
    private int _clockSteps;
    private double _offset;
    private long _readings;
    private long _overloads;
    private long _received;
    private long _used;
    private long _passedOver;
    private long _skipped;
    private long _same;
    private double _lastValue = double.NaN;
    private long _intervalCount;
    private long _latencyCount;
    private double _longestLatency = double.NaN;
    private double _lastReading = double.NaN; // elapsed seconds of the reading just before, NaN after a gap

    public long Readings => Interlocked.Read(ref _readings);

    /// <summary>Counts an event.</summary>
    /// <param name="one">The event.</param>
    /// <param name="line">It came of a line that is to be counted as received and used.</param>
    public void Event(in MeterEvent one, bool line = false)
    {
        lock (_gate)
        {
            if (line)
            {
                _received++;
                _used++;
            }

            if (one.Kind == MeterEventKind.Gap)
            {
                _gaps[(int)one.Reason]++;
                _lastReading = double.NaN;
                return;
            }

            _ = one.Kind == MeterEventKind.Reading ? _readings++ : _overloads++;
            if (!double.IsNaN(_lastReading))
            {
                _intervals[_intervalCount++ % Window] = one.ElapsedSeconds - _lastReading;
            }

            _lastReading = one.ElapsedSeconds;
            _same = one.Value == _lastValue ? _same + 1 : 1;
            _lastValue = one.Value;
            _latencies[_latencyCount++ % Window] = one.LatencySeconds;
            _longestLatency = one.LatencySeconds > _longestLatency ? one.LatencySeconds
                : double.IsNaN(_longestLatency) ? one.LatencySeconds : _longestLatency;
        }
    }

    public void LineReceived()
    {
        lock (_gate)
        {
            _received++;
        }
    }

    public void LineUsed()
    {
        lock (_gate)
        {
            _used++;
        }
    }

    public void LinePassedOver()
    {
        lock (_gate)
        {
            _passedOver++;
        }
    }

    public void LineReceivedAndRefused(GapReason reason)
    {
        lock (_gate)
        {
            _received++;
            _refused[(int)reason]++;
        }
    }

    public void LineRefused(GapReason reason)
    {
        lock (_gate)
        {
            _refused[(int)reason]++;
        }
    }

    public void Skipped(long polls)
    {
        lock (_gate)
        {
            _skipped += polls;
        }
    }

    public void Opened()
    {
        lock (_gate)
        {
            _connected = true;
            _openings++;
        }
    }

    public void Closed()
    {
        lock (_gate)
        {
            _connected = false;
            _lastReading = double.NaN;
        }
    }

    public void Identified(string identity)
    {
        lock (_gate)
        {
            _identity = identity;
        }
    }

    public void Clock(double offsetSeconds, bool stepped)
    {
        lock (_gate)
        {
            _offset = offsetSeconds;
            _clockSteps += stepped ? 1 : 0;
        }
    }

    public void Problem(string sentence)
    {
        lock (_gate)
        {
            _problems.Remove(sentence);
            _problems.Add(sentence);
            if (_problems.Count > MostProblems)
            {
                _problems.RemoveAt(0);
            }
        }
    }

    public MeterHealth Snapshot()
    {
        lock (_gate)
        {
            var intervals = _intervals.AsSpan(0, (int)Math.Min(_intervalCount, Window));
            var (mean, deviation) = MeanAndDeviation(intervals);
            return new MeterHealth
            {
                Identity = _identity,
                Connected = _connected,
                Openings = _openings,
                Readings = _readings,
                Overloads = _overloads,
                Gaps = ByReason(_gaps),
                LinesReceived = _received,
                LinesUsed = _used,
                LinesPassedOver = _passedOver,
                LinesRefused = ByReason(_refused),
                SkippedPolls = _skipped,
                SameReadings = _same,
                RatePerSecond = 1 / mean,
                JitterSeconds = deviation,
                LatencySeconds = MeanAndDeviation(_latencies.AsSpan(0, (int)Math.Min(_latencyCount, Window))).Mean,
                LongestLatencySeconds = _longestLatency,
                ClockSteps = _clockSteps,
                WallClockOffsetSeconds = _offset,
                Problems = [.. _problems],
            };
        }
    }

    private static Dictionary<GapReason, long> ByReason(long[] counts)
    {
        var byReason = new Dictionary<GapReason, long>();
        for (var reason = 0; reason < counts.Length; reason++)
        {
            if (counts[reason] > 0)
            {
                byReason.Add((GapReason)reason, counts[reason]);
            }
        }

        return byReason;
    }

    private static (double Mean, double Deviation) MeanAndDeviation(ReadOnlySpan<double> values)
    {
        if (values.IsEmpty)
        {
            return (double.NaN, double.NaN);
        }

        var sum = 0.0;
        foreach (var value in values)
        {
            sum += value;
        }

        var mean = sum / values.Length;
        var squares = 0.0;
        foreach (var value in values)
        {
            squares += (value - mean) * (value - mean);
        }

        return (mean, values.Length < 2 ? double.NaN : Math.Sqrt(squares / (values.Length - 1)));
    }
}
