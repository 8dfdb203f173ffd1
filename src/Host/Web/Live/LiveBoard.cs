using Lampwarden.Host.Soaking;

namespace Lampwarden.Host.Web.Live;

/// <summary>
/// All benches at this moment, and the stream of what happens to them. Hears the soaks; twice a second it puts together
/// what is new, so that a fast meter costs the page no more than a slow one. Thread-safe.
/// </summary>
public sealed class LiveBoard : ISoakListener, IAsyncDisposable
{
    /// <summary>How often what is new is sent, in real time even in a rehearsal.</summary>
    public static readonly TimeSpan Beat = TimeSpan.FromMilliseconds(500);

    // Half an hour of one bench, or most of a minute of forty: longer than a browser takes to come back.
    private const int EventsKept = 4096;

    private readonly Dictionary<string, LiveBench> _benches;
    private readonly Dictionary<string, NowEvent> _now = [];
    private readonly Lock _nowGate = new();
    private readonly Lock _collecting = new();
    private long _nowVersion;
    private readonly double _stuckSeconds;
    private readonly CancellationTokenSource _stop = new();
    private Task? _loop;

    /// <summary>A board of these benches.</summary>
    /// <param name="plans">At least one.</param>
    /// <param name="stuckSeconds">Real seconds without any word of a soak's loop after which its bench counts as blind; NaN: five, and three readings.</param>
    public LiveBoard(IReadOnlyList<BenchPlan> plans, double stuckSeconds = double.NaN)
    {
        _benches = plans.ToDictionary(plan => plan.Name, plan => new LiveBench(plan), StringComparer.Ordinal);
        _stuckSeconds = double.IsNaN(stuckSeconds) ? 5 + plans.Max(plan => 3 / plan.LineMeter.ReadingsPerSecond) : stuckSeconds;
        Names = [.. plans.Select(plan => plan.Name)];
    }

    /// <summary>The benches in the order of the configuration.</summary>
    public IReadOnlyList<string> Names { get; }

    internal EventLog Log { get; } = new(EventsKept);

    /// <inheritdoc/>
    public void Hear(SoakEvent happened)
    {
        if (_benches.TryGetValue(happened.Bench, out var bench))
        {
            bench.Hear(happened);
        }
    }

    /// <summary>Begins to put together what is new.</summary>
    public void Start() => _loop ??= Task.Run(RunAsync);

    /// <summary>One bench; null where there is none of that name.</summary>
    public BenchDocument? Bench(string name) => _benches.GetValueOrDefault(name)?.Snapshot();

    /// <summary>The trace of one bench; null where there is none of that name.</summary>
    public TraceDocument? Trace(string name) => _benches.GetValueOrDefault(name)?.Trace();

    /// <summary>Everything, for a reader that starts anew, and the number of the last event in it.</summary>
    internal (ResetDocument Document, long Number) Everything()
    {
        // The number is taken first: an event that comes between is then sent once more, which does no harm.
        var number = Log.Last;
        return (new ResetDocument(Log.Epoch, [.. Names.Select(name => _benches[name].Snapshot())]), number);
    }

    /// <summary>Instruments newer than a version, with that version; only the newest of each bench is kept.</summary>
    internal IReadOnlyList<NowEvent> NowAfter(long version)
    {
        lock (_nowGate)
        {
            return [.. _now.Values.Where(now => now.Version > version)];
        }
    }

    /// <summary>Puts together what is new since the last time and wakes the readers.</summary>
    internal void Collect()
    {
        lock (_collecting)
        {
            CollectInOrder();
        }

        Log.Wake();
    }

    private void CollectInOrder()
    {
        foreach (var (name, bench) in _benches)
        {
            var (changed, now, readings) = bench.Collect(_stuckSeconds);
            if (changed is not null)
            {
                Log.Add("bench", name, changed);
            }

            if (readings is not null)
            {
                Log.Add("readings", name, readings);
            }

            if (now is not null)
            {
                lock (_nowGate)
                {
                    _now[name] = new NowEvent(++_nowVersion, now);
                }
            }
        }
    }

    /// <summary>Stops.</summary>
    public async ValueTask DisposeAsync()
    {
        await _stop.CancelAsync();
        if (_loop is not null)
        {
            await _loop;
        }

        _stop.Dispose();
    }

    private async Task RunAsync()
    {
        using var beat = new PeriodicTimer(Beat);
        try
        {
            while (await beat.WaitForNextTickAsync(_stop.Token))
            {
                Collect();
            }
        }
        catch (OperationCanceledException)
        {
            // Told to stop.
        }
    }
}
