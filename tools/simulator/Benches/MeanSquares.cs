namespace Lampwarden.Simulator.Benches;

/// <summary>The last seconds of current and mains as running integrals of their squares, so that any meter window can be asked for.</summary>
/// <param name="longestWindowSeconds">How far back is kept.</param>
internal sealed class MeanSquares(double longestWindowSeconds)
{
    private readonly record struct Mark(double Seconds, double AmpsSquared, double VoltsSquared);

    private readonly List<Mark> _marks = [new(0, 0, 0)];
    private int _first;

    /// <summary>Goes on by a step that ends at a time.</summary>
    public void Add(double seconds, double rmsAmps, double rmsVolts, double stepSeconds)
    {
        var last = _marks[^1];
        _marks.Add(new Mark(seconds, last.AmpsSquared + rmsAmps * rmsAmps * stepSeconds, last.VoltsSquared + rmsVolts * rmsVolts * stepSeconds));
        while (_marks[_first + 1].Seconds < seconds - longestWindowSeconds)
        {
            _first++;
        }

        if (_first > 4096)
        {
            _marks.RemoveRange(0, _first);
            _first = 0;
        }
    }

    /// <summary>RMS current and mains over the window that ends with the last step; a window that reaches before the start is cut.</summary>
    public (double Amps, double Volts) RmsOver(double windowSeconds)
    {
        var end = _marks[^1];
        var from = Math.Max(end.Seconds - windowSeconds, _marks[_first].Seconds);
        if (end.Seconds - from < 1e-9)
        {
            return (0, 0);
        }

        var index = _marks.Count - 2;
        while (index > _first && _marks[index].Seconds > from)
        {
            index--;
        }

        var (before, after) = (_marks[index], _marks[index + 1]);
        var share = (from - before.Seconds) / (after.Seconds - before.Seconds);
        var amps = before.AmpsSquared + share * (after.AmpsSquared - before.AmpsSquared);
        var volts = before.VoltsSquared + share * (after.VoltsSquared - before.VoltsSquared);
        var length = end.Seconds - from;
        return (Math.Sqrt(Math.Max(0, end.AmpsSquared - amps) / length), Math.Sqrt(Math.Max(0, end.VoltsSquared - volts) / length));
    }
}
