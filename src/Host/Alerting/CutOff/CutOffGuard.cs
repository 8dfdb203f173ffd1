using Lampwarden.Acquisition;
using Lampwarden.Acquisition.Transport;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Unattended;

namespace Lampwarden.Host.Alerting.CutOff;

/// <summary>The cut-offs of all benches. Hears findings on the soaks' loops and acts on loops of its own.</summary>
public sealed class CutOffGuard : ISoakListener, IAsyncDisposable
{
    private readonly Dictionary<string, CutOffUnit> _units;

    /// <summary>Takes up every output's state and starts.</summary>
    public CutOffGuard(CutOffOptions options, string instance, string recordFolder, AlertDispatch dispatch, Pulse pulse, double stuckAfterSeconds, TimeProvider time, ILogger logger)
    {
        var around = new Func<string, CutOffSurroundings>(bench => new CutOffSurroundings(
            () => pulse.SecondsSince(bench), stuckAfterSeconds, dispatch.Raise, dispatch.Clear));
        _units = options.Outputs.ToDictionary(wire => wire.Bench, wire => new CutOffUnit(
            options, wire, options.DryRun ? null : Output(wire, instance, time), new CutOffFile(recordFolder, wire.Bench), around(wire.Bench), time, logger));
    }

    /// <summary>The cut-offs by bench.</summary>
    public IReadOnlyDictionary<string, CutOffUnit> Units => _units;

    /// <inheritdoc/>
    public void Hear(SoakEvent happened)
    {
        if (!_units.TryGetValue(happened.Bench, out var unit))
        {
            return;
        }

        switch (happened)
        {
            case FindingChanged found:
                unit.Take(found.Change);
                break;
            case RunEnded:
                unit.Forget();
                break;
        }
    }

    /// <inheritdoc/>
    public async ValueTask DisposeAsync() => await Task.WhenAll(_units.Values.Select(unit => unit.DisposeAsync().AsTask()));

    private static ICutOffOutput Output(CutOffOutputOptions wire, string instance, TimeProvider time) => wire.Kind switch
    {
        "mqtt" => new MqttOutput(wire, instance, time),
        "serial" => new WireOutput(new SerialTransport(new TransportOptions { Kind = "serial", Port = wire.Port, BaudRate = wire.BaudRate })),
        _ => new WireOutput(new TcpTransport(new TransportOptions { Kind = "tcp", Host = wire.Host, Port = wire.Port })),
    };
}
