namespace Lampwarden.Host.Web.Live;

/// <summary>The trace of a run as the page first draws it.</summary>
/// <param name="Run">The run; null before one began.</param>
/// <param name="BucketSeconds">Length of a bucket; 0 where every reading stands for itself.</param>
/// <param name="Seconds">Start of each bucket, ascending.</param>
/// <param name="LowAmps">Least reading in it; NaN (null) where a gap begins.</param>
/// <param name="HighAmps">Greatest reading in it.</param>
/// <param name="First">The first readings as they came: the inrush.</param>
/// <param name="LastSeconds">The last reading in it: later <c>readings</c> events go on from there.</param>
public sealed record TraceDocument(
    string? Run, double BucketSeconds, double[] Seconds, double[] LowAmps, double[] HighAmps, ReadingColumns First, double LastSeconds);

/// <summary>Readings in columns.</summary>
/// <param name="Seconds">Since the run began.</param>
/// <param name="Amps">NaN (null) for a gap or an overload.</param>
public sealed record ReadingColumns(double[] Seconds, double[] Amps);

/// <summary>
/// A whole run in bounded memory: buckets of least and greatest that double in length when there are too many.
/// Not thread-safe: its bench's lock guards it. The page's model/trace.js goes on where this ends, by the same rules.
/// </summary>
internal sealed class LiveTrace
{
    private const int MostBuckets = 1500;
    private const int FirstReadings = 240;

    private readonly List<double> _firstSeconds = [];
    private readonly List<double> _firstAmps = [];
    private readonly List<double> _seconds = [];
    private readonly List<double> _low = [];
    private readonly List<double> _high = [];
    private double _bucketSeconds;
    private double _last = double.NegativeInfinity;

    /// <summary>Takes one reading; NaN for a gap.</summary>
    public void Append(double seconds, double amps)
    {
        if (!(seconds > _last))
        {
            return;
        }

        _last = seconds;
        if (_firstSeconds.Count < FirstReadings)
        {
            _firstSeconds.Add(seconds);
            _firstAmps.Add(amps);
        }

        var newest = _seconds.Count - 1;
        if (newest >= 0 && !double.IsNaN(amps) && !double.IsNaN(_low[newest]) && _bucketSeconds > 0 && Bucket(seconds) == Bucket(_seconds[newest]))
        {
            _low[newest] = Math.Min(_low[newest], amps);
            _high[newest] = Math.Max(_high[newest], amps);
        }
        else if (!double.IsNaN(amps) || (newest >= 0 && !double.IsNaN(_low[newest])))
        {
            Add(seconds, amps, amps);
        }

        while (_seconds.Count > MostBuckets)
        {
            Halve();
        }
    }

    /// <summary>What the page is given.</summary>
    public TraceDocument Document(string? run) => new(
        run, _bucketSeconds, [.. _seconds], [.. _low], [.. _high], new ReadingColumns([.. _firstSeconds], [.. _firstAmps]), _last);

    private double Bucket(double seconds) => Math.Floor(seconds / _bucketSeconds);

    private void Add(double seconds, double low, double high)
    {
        _seconds.Add(seconds);
        _low.Add(low);
        _high.Add(high);
    }

    private void Halve()
    {
        _bucketSeconds = Math.Max(_bucketSeconds * 2, (_seconds[^1] - _seconds[0]) * 2 / MostBuckets);
        double[] seconds = [.. _seconds], low = [.. _low], high = [.. _high];
        _seconds.Clear();
        _low.Clear();
        _high.Clear();
        for (var index = 0; index < seconds.Length; index++)
        {
            var newest = _seconds.Count - 1;
            var same = newest >= 0 && Bucket(seconds[index]) == Bucket(_seconds[newest]);
            var gap = double.IsNaN(low[index]);
            if (same && gap && index + 1 < seconds.Length && Bucket(seconds[index + 1]) == Bucket(_seconds[newest]))
            {
                continue; // A gap shorter than a bucket cannot be drawn; the list of gaps still names it.
            }

            if (same && !gap && !double.IsNaN(_low[newest]))
            {
                _low[newest] = Math.Min(_low[newest], low[index]);
                _high[newest] = Math.Max(_high[newest], high[index]);
            }
            else
            {
                Add(seconds[index], low[index], high[index]);
            }
        }
    }
}
