namespace Lampwarden.Host.Soaking;

/// <summary>A time without readings.</summary>
/// <param name="FromSeconds">The last reading before it, or 0.</param>
/// <param name="ToSeconds">The first reading after it, or the end of the run.</param>
/// <param name="Reason">Why, by its written name.</param>
public sealed record Gap(double FromSeconds, double ToSeconds, string Reason);

/// <summary>Joins missed readings of one reason into gaps, as a run goes on.</summary>
public sealed class GapBook
{
    private readonly List<Gap> _gaps = [];
    private double _lastReadingSeconds;
    private Gap? _open;

    /// <summary>Gaps so far, the open one included.</summary>
    public IReadOnlyList<Gap> Gaps => _open is null ? _gaps : [.. _gaps, _open];

    /// <summary>A reading came: an open gap ends with it.</summary>
    /// <returns>The gap that ended, or null.</returns>
    public Gap? Reading(double seconds)
    {
        var ended = Close(seconds);
        _lastReadingSeconds = seconds;
        return ended;
    }

    /// <summary>No reading came. A new reason begins a new gap.</summary>
    /// <returns>The gap of another reason that ended here, or null.</returns>
    public Gap? Missed(double seconds, string reason)
    {
        if (_open is { } open && open.Reason == reason)
        {
            _open = open with { ToSeconds = seconds };
            return null;
        }

        var from = _open?.ToSeconds ?? _lastReadingSeconds;
        var ended = Close(from);
        _open = new Gap(from, seconds, reason);
        return ended;
    }

    /// <summary>The run is over.</summary>
    /// <returns>The gap that was open, or null.</returns>
    public Gap? End(double seconds) => Close(Math.Max(seconds, _open?.ToSeconds ?? 0));

    private Gap? Close(double toSeconds)
    {
        if (_open is not { } open)
        {
            return null;
        }

        var ended = open with { ToSeconds = toSeconds };
        _gaps.Add(ended);
        _open = null;
        return ended;
    }
}
