using System.Collections.Concurrent;
using Lampwarden.Host.Soaking;

namespace Lampwarden.Host.Unattended;

/// <summary>
/// Knows which benches' loops still handle what their meters send. A gap counts too: a silent meter is the watch's
/// business, a silent loop is ours. Thread-safe.
/// </summary>
public sealed class Pulse : ISoakListener
{
    private readonly ConcurrentDictionary<string, long> _beats = new();
    private readonly IReadOnlyList<string> _benches;
    private readonly TimeProvider _time;

    /// <summary>Expects nothing yet.</summary>
    public Pulse(IReadOnlyList<string> benches, TimeProvider time) => (_benches, _time) = (benches, time);

    /// <summary>Expects a first beat of every bench from now on: a service that is still starting, on however slow a machine, is not stuck.</summary>
    public void Expect()
    {
        foreach (var bench in _benches)
        {
            _beats.TryAdd(bench, _time.GetTimestamp());
        }
    }

    /// <inheritdoc/>
    public void Hear(SoakEvent happened)
    {
        switch (happened)
        {
            case RunEnded:
                // A bench whose soak is over owes no readings, until it handles one again.
                _beats.TryRemove(happened.Bench, out _);
                break;
            case Observed or WaitingForSwitchOn or IdleLook:
                _beats[happened.Bench] = _time.GetTimestamp();
                break;
        }
    }

    /// <summary>Seconds since a bench's loop last handled something; null where none is expected.</summary>
    public double? SecondsSince(string bench) => _beats.TryGetValue(bench, out var beat) ? _time.GetElapsedTime(beat).TotalSeconds : null;

    /// <summary>Benches whose loops have handled nothing for longer than this.</summary>
    public IReadOnlyList<string> Stuck(double afterSeconds) =>
        [.. _beats.Where(beat => _time.GetElapsedTime(beat.Value).TotalSeconds > afterSeconds).Select(beat => beat.Key).Order(StringComparer.Ordinal)];
}
