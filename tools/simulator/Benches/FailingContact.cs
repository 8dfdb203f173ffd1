namespace Lampwarden.Simulator.Benches;

/// <summary>
/// A unit that drops out and comes back: at random moments, as a loose contact does, or in step, as a protective circuit does
/// that switches off and tries again. Asked for times that never go back.
/// </summary>
/// <param name="fault">Its kind (intermittent: at random; anything else: in step), spacing and length.</param>
/// <param name="random">Draws the moments of a loose contact.</param>
internal sealed class FailingContact(ScenarioFault fault, Random random)
{
    private readonly double _end = fault.ForSeconds > 0 ? fault.AtSeconds + fault.ForSeconds : double.PositiveInfinity;
    private double _outFrom = fault.AtSeconds;

    /// <summary>Whether the unit is cut off at this simulated second.</summary>
    public bool IsOutAt(double seconds)
    {
        while (seconds >= _outFrom + fault.OutSeconds)
        {
            _outFrom += NextSeconds();
        }

        return seconds >= _outFrom && seconds < _end;
    }

    /// <summary>From one drop-out to the next: the mean spacing, or an exponential waiting time around it, never two at once.</summary>
    private double NextSeconds() => fault.Kind == "intermittent"
        ? fault.OutSeconds + (-Math.Log(1 - random.NextDouble()) * Math.Max(0, fault.EverySeconds - fault.OutSeconds))
        : Math.Max(fault.EverySeconds, fault.OutSeconds * 1.01);
}
