namespace Lampwarden.Simulator.Instruments;

/// <summary>What a simulated meter is connected to.</summary>
public enum MeasuredQuantity
{
    LineCurrent,
    MainsVoltage,
}

/// <summary>The world behind a simulated meter: asked for the true value whenever the meter measures.</summary>
public interface ISimulatedQuantity
{
    /// <summary>True RMS value in A or V over a window.</summary>
    /// <param name="quantity">Which quantity.</param>
    /// <param name="simulatedSeconds">End of the window, in seconds since the simulation began; never decreasing between calls for one quantity.</param>
    /// <param name="windowSeconds">Length of the window.</param>
    double Rms(MeasuredQuantity quantity, double simulatedSeconds, double windowSeconds);
}
