using System.Collections.Concurrent;
using System.Diagnostics;
using Lampwarden.Host.Soaking;
using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Benchmarks.Unattended.Haul;

/// <summary>
/// A clock that goes on one poll at a time, when every bench has handled the last: as fast as the computer can, and no
/// faster, so that its hurry is never taken for a silent meter.
/// </summary>
/// <param name="pollSeconds">How far it goes on at a time.</param>
/// <param name="atRound">Called before each round, with its number from 1.</param>
internal sealed class Lockstep(double pollSeconds, Action<long> atRound) : FakeTimeProvider(TimeProvider.System.GetUtcNow()), ISoakListener, IDisposable
{
    private static readonly TimeSpan Patience = TimeSpan.FromSeconds(0.25);

    private readonly ConcurrentDictionary<string, long> _handled = new();
    private readonly ConcurrentDictionary<string, long> _weighed = new();
    private readonly SemaphoreSlim _progress = new(0);

    /// <summary>Polls that a bench's soak has handed on, with and without a reading.</summary>
    public long Weighed(string bench) => _weighed.GetValueOrDefault(bench);

    public void Dispose() => _progress.Dispose();

    public void Begin(string[] benches)
    {
        foreach (var bench in benches)
        {
            _handled.TryAdd(bench, 0);
        }

        _ = Task.Run(GoOnAsync);
    }

    public void Hear(SoakEvent happened)
    {
        if (happened is Observed)
        {
            _weighed.AddOrUpdate(happened.Bench, 1, (_, polls) => polls + 1);
        }

        if (happened is RunEnded)
        {
            _handled.TryRemove(happened.Bench, out _);
        }
        else if (happened is Observed or WaitingForSwitchOn && _handled.TryGetValue(happened.Bench, out var count))
        {
            _handled.TryUpdate(happened.Bench, count + 1, count);
        }

        _progress.Release();
    }

    private async Task GoOnAsync()
    {
        for (var round = 1L; !_handled.IsEmpty; round++)
        {
            atRound(round);
            Advance(TimeSpan.FromSeconds(pollSeconds));
            var stamp = Stopwatch.GetTimestamp();
            while (_handled.Values.Any(count => count < round) && Stopwatch.GetElapsedTime(stamp) < Patience)
            {
                await _progress.WaitAsync(Patience);
            }

            // A bench that had nothing to handle (its port is being opened again) is not waited for twice.
            foreach (var late in _handled.Where(pair => pair.Value < round).ToList())
            {
                _handled.TryUpdate(late.Key, round, late.Value);
            }
        }
    }
}
