namespace Lampwarden.Host.Alerting.Life;

/// <summary>Counts how often each cause is raised, before any delay smooths it, and says when one chatters.</summary>
internal sealed class ChatterGuard(int count, double quietSeconds)
{
    private const double WindowSeconds = 60;

    private readonly Dictionary<string, Queue<double>> _raises = [];
    private readonly Dictionary<string, double> _chattering = [];

    /// <summary>Takes one raise.</summary>
    /// <returns>True when the cause begins to chatter with it.</returns>
    public bool Raised(string cause, double seconds)
    {
        if (!_raises.TryGetValue(cause, out var raises))
        {
            _raises[cause] = raises = new Queue<double>();
        }

        raises.Enqueue(seconds);
        while (raises.Peek() <= seconds - WindowSeconds)
        {
            raises.Dequeue();
        }

        if (_chattering.ContainsKey(cause))
        {
            _chattering[cause] = seconds;
            return false;
        }

        return raises.Count >= count && _chattering.TryAdd(cause, seconds);
    }

    /// <summary>A cause that has been quiet long enough; null for none. Ask again until null.</summary>
    public string? Quiet(double seconds)
    {
        foreach (var (cause, last) in _chattering)
        {
            if (seconds - last >= quietSeconds)
            {
                _chattering.Remove(cause);
                return cause;
            }
        }

        return null;
    }
}
