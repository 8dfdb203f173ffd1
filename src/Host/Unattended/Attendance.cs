using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.CutOff;
using Lampwarden.Host.Alerting.Life;
using Lampwarden.Host.Alerting.Routes;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Recording.Forwarding;
using Lampwarden.Host.Soaking;
using OpenTelemetry;
using OpenTelemetry.Exporter;
using OpenTelemetry.Metrics;

namespace Lampwarden.Host.Unattended;

/// <summary>How a command wants the service attended.</summary>
/// <param name="Options">The whole configuration.</param>
/// <param name="Path">The file it came from, to be read again when it changes; null for none.</param>
/// <param name="ResumeWithin">How long ago a run may have been left off to be carried on; null: every soak is a new one.</param>
public sealed record AttendanceOrder(LampwardenOptions Options, string? Path = null, TimeSpan? ResumeWithin = null);

/// <summary>
/// Everything that makes a person hear of an alert, and somebody notice when the watcher dies: routes, cut-off, heartbeat,
/// figures, reloading. One for the service; lives from before the first soak to after the last.
/// </summary>
public sealed class Attendance : IAsyncDisposable
{
    private readonly ServiceManager _manager = new();
    private readonly MeterProvider? _collector;
    private readonly Telemetry _telemetry;
    private readonly CutOffGuard? _cutOff;
    private readonly Pulse _pulse;
    private readonly Heart _heart;
    private readonly SettingsReload? _reload;
    private readonly StoreWarden _storeWarden;

    /// <summary>Starts all of it.</summary>
    /// <param name="order">The configuration.</param>
    /// <param name="benches">Names of the benches.</param>
    /// <param name="recordFolder">Where the store lies.</param>
    /// <param name="store">The store's health.</param>
    /// <param name="forwarding">That of forwarding to a server; null where nothing is forwarded.</param>
    /// <param name="logger">For structured events.</param>
    /// <exception cref="ConfigurationException">A secret is named but not there.</exception>
    public Attendance(AttendanceOrder order, IReadOnlyList<string> benches, string recordFolder, Func<StoreHealth> store, Func<ForwardingHealth>? forwarding, ILogger logger)
    {
        // Life's clock even in a rehearsal: people, brokers and service managers do not run faster.
        var time = TimeProvider.System;
        var (alerts, unattended) = (order.Options.Alerts, order.Options.Unattended);
        var instance = RouteFactory.Instance(alerts);
        Rules = RouteFactory.Rules(alerts);
        Dispatch = new AlertDispatch(Rules, new ServiceAlertLog(recordFolder), time, logger);
        Dispatch.Use(turned => RouteFactory.Make(alerts, time, logger, turned));
        _pulse = new Pulse(benches, time);
        _telemetry = new Telemetry(_pulse, store, Dispatch, benches, time);
        Metrics = new MetricsText();
        _cutOff = alerts.CutOff is { Outputs.Count: > 0 } options
            ? new CutOffGuard(options, instance, recordFolder, Dispatch, _pulse, unattended.StuckAfterSeconds, time, logger)
            : null;
        Health = new HealthBoard(instance, benches, _pulse, unattended.StuckAfterSeconds, store, forwarding, Dispatch, _cutOff, time);
        _heart = new Heart(unattended, _pulse, Dispatch, _manager, time, logger);
        _storeWarden = new StoreWarden(store, Dispatch, time);
        _reload = order.Path is null ? null : new SettingsReload(order.Path, order.Options, Dispatch, time, logger);
        _collector = unattended.OtlpUrl is { } url
            ? Sdk.CreateMeterProviderBuilder().AddMeter(Telemetry.MeterName).AddOtlpExporter(otlp => (otlp.Endpoint, otlp.Protocol) = (Telemetry.CollectorPath(url), OtlpExportProtocol.HttpProtobuf)).Build()
            : null;
        Listeners = _cutOff is null ? [_pulse, _telemetry] : [_cutOff, _pulse, _telemetry];
    }

    /// <summary>How alerts live.</summary>
    public AlertRules Rules { get; }

    /// <summary>Tells people; a route of every soak.</summary>
    public AlertDispatch Dispatch { get; }

    /// <summary>Who must hear what happens on the benches, the cut-off first.</summary>
    public IReadOnlyList<ISoakListener> Listeners { get; }

    /// <summary>For the health endpoint.</summary>
    public HealthBoard Health { get; }

    /// <summary>For the metrics endpoint.</summary>
    public MetricsText Metrics { get; }

    /// <summary>Every soak is on its way.</summary>
    /// <param name="benches">How many.</param>
    public void Ready(int benches)
    {
        _pulse.Expect();
        _manager.Ready();
        _manager.Status(FormattableString.Invariant($"watching {benches} bench{(benches == 1 ? "" : "es")}"));
    }

    /// <summary>The service begins to end.</summary>
    public void Stopping() => _manager.Stopping();

    /// <summary>Stops all of it, routes last: they tell what the others still say.</summary>
    public async ValueTask DisposeAsync()
    {
        if (_reload is not null)
        {
            await _reload.DisposeAsync();
        }

        await _heart.DisposeAsync();
        await _storeWarden.DisposeAsync();
        if (_cutOff is not null)
        {
            await _cutOff.DisposeAsync();
        }

        await Dispatch.DisposeAsync();
        _collector?.Dispose();
        Metrics.Dispose();
        _telemetry.Dispose();
        _manager.Dispose();
    }
}
