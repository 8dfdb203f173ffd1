namespace Lampwarden.Simulator.Instruments;

/// <summary>The error queue of SCPI-1999: oldest first; when full the newest entry becomes -350.</summary>
internal sealed class ScpiErrorQueue
{
    private const int Capacity = 20;
    private readonly LinkedList<string> _errors = new();

    public void Add(int number, string text)
    {
        if (_errors.Count == Capacity)
        {
            _errors.RemoveLast();
            (number, text) = (-350, "Queue overflow");
        }

        _errors.AddLast(FormattableString.Invariant($"{number},\"{text}\""));
    }

    public string Next()
    {
        if (_errors.First is not { } oldest)
        {
            return "+0,\"No error\"";
        }

        _errors.RemoveFirst();
        return oldest.Value;
    }

    public void Clear() => _errors.Clear();
}
