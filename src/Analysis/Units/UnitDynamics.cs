namespace Lampwarden.Analysis.Units;

/// <summary>A unit in time: one line current, and states that go by differential equations.</summary>
internal abstract class UnitDynamics
{
    /// <summary>How many states: a filament temperature, a reservoir's volts, a flux, a speed.</summary>
    public virtual int StateCount => 0;

    /// <summary>
    /// Longest step in seconds that the unit bears with this much resistance before it: the simulation takes shorter steps for a quick one.
    /// Runge-Kutta of fourth order is stable to 2.8 time constants; half of that keeps it exact too.
    /// </summary>
    public virtual double LongestStepSeconds(double leastOhms, double mostOhms) => double.PositiveInfinity;

    /// <summary>States of a unit that has been off for long.</summary>
    public virtual void Rest(Span<double> state)
    {
    }

    /// <summary>The line current with the unit fed from a source through a resistance, and the rates of its states.</summary>
    /// <param name="volts">Source at this instant.</param>
    /// <param name="seriesOhms">All resistance before the unit at this instant.</param>
    /// <param name="state">The states.</param>
    /// <param name="rates">Receives their time derivatives.</param>
    public abstract double Current(double volts, double seriesOhms, ReadOnlySpan<double> state, Span<double> rates);

    /// <summary>Called after each whole step, for what switches: a supply that starts or stops.</summary>
    public virtual void EndStep(Span<double> state)
    {
    }
}
