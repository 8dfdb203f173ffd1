namespace Lampwarden.Simulator.Instruments;

/// <summary>The analogue half of a simulated meter: true value, gain error, noise, counts, range.</summary>
internal sealed class MeasuringFront
{
    private readonly SimulatedMeterOptions _options;
    private readonly ISimulatedQuantity _world;
    private readonly Random _noise;

    public MeasuringFront(SimulatedMeterOptions options, ISimulatedQuantity world)
    {
        _options = options;
        _world = world;
        _noise = new Random(options.Seed);
    }

    /// <summary>What the display shows for the window ending at an instant; infinity is overload.</summary>
    /// <param name="quantity">What is measured.</param>
    /// <param name="seconds">End of the window in simulated seconds.</param>
    /// <param name="range">Range set, in A or V; null for the largest.</param>
    public double Show(MeasuredQuantity quantity, double seconds, double? range)
    {
        var current = quantity == MeasuredQuantity.LineCurrent;
        var count = current ? _options.CurrentCountSize : _options.VoltageCountSize;
        var largest = current ? _options.CurrentRange : _options.VoltageRange;
        var truth = _world.Rms(quantity, seconds, _options.WindowSeconds);
        var shown = (truth * (1 + _options.GainError)) + (count * _options.NoiseCounts * Gaussian());
        var counts = Math.Round(shown / count);
        // Meters have about a tenth of room above a range's name.
        return shown > 1.1 * Math.Min(range ?? largest, largest) ? double.PositiveInfinity : Math.Max(0, counts) * count;
    }

    // Box and Muller, 1958: one normal deviate from two uniform ones.
    private double Gaussian() => Math.Sqrt(-2 * Math.Log(1 - _noise.NextDouble())) * Math.Cos(Math.Tau * _noise.NextDouble());
}
