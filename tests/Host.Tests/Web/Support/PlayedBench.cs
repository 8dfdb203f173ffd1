using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Host.Tests.Web.Support;

/// <summary>A bench whose current a test sets by hand, behind a simulated meter on a TCP port.</summary>
internal sealed class PlayedBench : ISimulatedQuantity, IAsyncDisposable
{
    private readonly TcpInstrumentPort _port = new();
    private readonly SimulatedMeter _meter;
    private double _amps;

    public PlayedBench(TimeProvider time) =>
        _meter = new SimulatedMeter(new SimulatedMeterOptions { CurrentCountSize = 0.0001, NoiseCounts = 0.3, CurrentRange = 10 }, this, _port, time);

    /// <summary>What flows.</summary>
    public double Amps
    {
        get => Volatile.Read(ref _amps);
        set => Volatile.Write(ref _amps, value);
    }

    public string Port => _port.Port.ToString(System.Globalization.CultureInfo.InvariantCulture);

    public double Rms(MeasuredQuantity quantity, double simulatedSeconds, double windowSeconds) => Amps;

    public async ValueTask DisposeAsync()
    {
        await _meter.DisposeAsync();
        await _port.DisposeAsync();
    }
}
