using Lampwarden.Host.Alerting.Life;

namespace Lampwarden.Host.Alerting.Routes;

/// <summary>When a route may send its next message, and whether what waits becomes one message. Seconds come from outside.</summary>
/// <param name="atMostPerMinute">Messages in any minute.</param>
public sealed class Pace(int atMostPerMinute)
{
    private const double FloodSpacingSeconds = 60;
    private const double CriticalSpacingSeconds = 10;

    private readonly Queue<double> _sent = [];
    private double _lastSeconds = double.NegativeInfinity;

    /// <summary>Whether there is a flood.</summary>
    public FloodGuard Flood { get; } = new();

    /// <summary>Seconds to wait before the next message; 0 to send now.</summary>
    /// <param name="seconds">Now.</param>
    /// <param name="critical">Whether something critical waits: in a flood it waits a sixth as long.</param>
    public double WaitSeconds(double seconds, bool critical)
    {
        Flood.Pass(seconds);
        while (_sent.TryPeek(out var oldest) && oldest <= seconds - 60)
        {
            _sent.Dequeue();
        }

        var wait = _sent.Count >= atMostPerMinute ? _sent.Peek() + 60 - seconds : 0;
        if (Flood.InFlood)
        {
            wait = Math.Max(wait, _lastSeconds + (critical ? CriticalSpacingSeconds : FloodSpacingSeconds) - seconds);
        }

        return Math.Max(0, wait);
    }

    /// <summary>A message was sent.</summary>
    public void Sent(double seconds)
    {
        _lastSeconds = seconds;
        _sent.Enqueue(seconds);
    }
}
