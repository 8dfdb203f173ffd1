using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Simulator.Benches;

/// <summary>Where a simulated meter can be reached.</summary>
/// <param name="Name">line or mains.</param>
/// <param name="Quantity">What it measures.</param>
/// <param name="TransportKind">serial or tcp.</param>
/// <param name="Place">A path, or host:port.</param>
public sealed record RigMeter(string Name, MeasuredQuantity Quantity, string TransportKind, string Place);

/// <summary>A simulated bench with its meters on real wires: pseudo-terminals where the system has them, else TCP on loopback.</summary>
public sealed class SimulatedRig : IAsyncDisposable
{
    private readonly List<IInstrumentPort> _ports = [];
    private readonly List<SimulatedMeter> _meters = [];
    private readonly CancellationTokenSource _over = new();
    private readonly Task _cableScript;
    private int _asked;

    /// <summary>Switches the rig on: the meters answer from now on, mains comes at the scenario's time.</summary>
    /// <param name="scenario">What will happen.</param>
    /// <param name="time">The simulation's clock.</param>
    /// <param name="makePort">Makes one meter's wire; null: pseudo-terminal where there is one, else TCP.</param>
    public SimulatedRig(Scenario scenario, TimeProvider time, Func<IInstrumentPort>? makePort = null)
    {
        makePort ??= OperatingSystem.IsWindows() ? () => new TcpInstrumentPort() : () => new PseudoTerminal();
        Bench = new SimulatedBench(scenario);
        var start = time.GetTimestamp();
        var reached = new List<RigMeter>();
        foreach (var quantity in scenario.MainsMeasured ? [MeasuredQuantity.LineCurrent, MeasuredQuantity.MainsVoltage] : new[] { MeasuredQuantity.LineCurrent })
        {
            var port = makePort();
            _ports.Add(port);
            _meters.Add(new SimulatedMeter(Traits(scenario, quantity), new CountingBench(this, time as RehearsalClock), port, time, start));
            reached.Add(new RigMeter(quantity == MeasuredQuantity.LineCurrent ? "line" : "mains", quantity, port is TcpInstrumentPort ? "tcp" : "serial", port.Place));
        }

        Meters = reached;
        _cableScript = Task.Run(() => PlayCablesAsync(scenario, time, start));
    }

    /// <summary>The bench behind the meters.</summary>
    public SimulatedBench Bench { get; }

    /// <summary>Where the meters are.</summary>
    public IReadOnlyList<RigMeter> Meters { get; }

    /// <summary>How often the line current was asked for so far.</summary>
    public int Asked => Volatile.Read(ref _asked);

    /// <summary>Switches the rig off and closes its wires.</summary>
    public async ValueTask DisposeAsync()
    {
        await _over.CancelAsync();
        await _cableScript;
        foreach (var meter in _meters)
        {
            await meter.DisposeAsync();
        }

        foreach (var port in _ports)
        {
            await port.DisposeAsync();
        }

        _over.Dispose();
    }

    private static SimulatedMeterOptions Traits(Scenario scenario, MeasuredQuantity quantity) => new()
    {
        Quantity = quantity,
        WindowSeconds = scenario.Meter.WindowSeconds,
        CurrentCountSize = scenario.Meter.CountSize,
        CurrentRange = scenario.Meter.RangeAmps,
        GainError = quantity == MeasuredQuantity.LineCurrent ? scenario.Meter.GainErrorPercent / 100 : 0,
        NoiseCounts = 0.3,
        Seed = scenario.Seed,
        Dialect = scenario.Meter.Dialect,
        LinesPerSecond = scenario.Meter.ReadingsPerSecond,
        Echo = scenario.Meter.Echo,
        Troubles = quantity == MeasuredQuantity.LineCurrent ? scenario.Meter.Troubles : [],
    };

    /// <summary>The bench, telling the clock whenever its line current is asked for.</summary>
    private sealed class CountingBench(SimulatedRig rig, RehearsalClock? clock) : ISimulatedQuantity
    {
        public double Rms(MeasuredQuantity quantity, double simulatedSeconds, double windowSeconds)
        {
            if (quantity == MeasuredQuantity.LineCurrent)
            {
                clock?.Pulse();
                Interlocked.Increment(ref rig._asked);
            }

            return rig.Bench.Rms(quantity, simulatedSeconds, windowSeconds);
        }
    }

    private async Task PlayCablesAsync(Scenario scenario, TimeProvider time, long start)
    {
        try
        {
            foreach (var pull in scenario.Faults.Where(fault => fault.Kind == "meter-unplugged").OrderBy(fault => fault.AtSeconds))
            {
                await UntilAsync(pull.AtSeconds);
                _meters[0].Unplug();
                if (pull.ForSeconds > 0)
                {
                    await UntilAsync(pull.AtSeconds + pull.ForSeconds);
                    _meters[0].PlugIn();
                }
            }
        }
        catch (OperationCanceledException) when (_over.IsCancellationRequested)
        {
            // Switched off.
        }

        async Task UntilAsync(double seconds)
        {
            var left = seconds - time.GetElapsedTime(start).TotalSeconds;
            if (left > 0)
            {
                await Task.Delay(TimeSpan.FromSeconds(left), time, _over.Token);
            }
        }
    }
}
