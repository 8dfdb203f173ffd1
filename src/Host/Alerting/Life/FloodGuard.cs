namespace Lampwarden.Host.Alerting.Life;

/// <summary>
/// Says when alerts come faster than a person can take them in. A flood begins at ten alerts within ten minutes and
/// ends below five (as public summaries of ISA-18.2 give it), so that it does not flap.
/// </summary>
public sealed class FloodGuard
{
    private const double WindowSeconds = 600;
    private const int Begins = 10;
    private const int Ends = 5;

    private readonly Queue<double> _raises = [];

    /// <summary>Whether there is a flood as of the last call.</summary>
    public bool InFlood { get; private set; }

    /// <summary>Alerts within the last ten minutes.</summary>
    public int Count => _raises.Count;

    /// <summary>An alert was raised.</summary>
    /// <returns>True when a flood begins with it.</returns>
    public bool Raised(double seconds)
    {
        _raises.Enqueue(seconds);
        Pass(seconds);
        if (InFlood || _raises.Count < Begins)
        {
            return false;
        }

        return InFlood = true;
    }

    /// <summary>Lets time pass.</summary>
    public void Pass(double seconds)
    {
        while (_raises.TryPeek(out var oldest) && oldest <= seconds - WindowSeconds)
        {
            _raises.Dequeue();
        }

        InFlood &= _raises.Count >= Ends;
    }
}
