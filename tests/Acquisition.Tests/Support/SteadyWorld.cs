using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Acquisition.Tests.Support;

/// <summary>A world of one number each, changed by hand.</summary>
internal sealed class SteadyWorld : ISimulatedQuantity
{
    public double Amps { get; set; } = 0.4125;

    public double Volts { get; set; } = 119.62;

    public double Rms(MeasuredQuantity quantity, double simulatedSeconds, double windowSeconds) =>
        quantity == MeasuredQuantity.LineCurrent ? Amps : Volts;
}
