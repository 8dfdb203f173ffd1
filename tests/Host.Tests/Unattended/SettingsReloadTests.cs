using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Life;
using Lampwarden.Host.Alerting.Routes;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Tests.Alerting;
using Lampwarden.Host.Unattended;
using Microsoft.Extensions.Logging;
using Microsoft.Extensions.Logging.Abstractions;

namespace Lampwarden.Host.Tests.Unattended;

public sealed class SettingsReloadTests : IDisposable
{
    private readonly string _path = Path.GetTempFileName();

    public void Dispose() => File.Delete(_path);

    private void Write(string routes) => File.WriteAllText(_path, $$"""
        { "benches": [ { "name": "attic", "mains": "230 V 50 Hz", "bank": "150 W", "unit": "resistor 900 ohm",
            "meters": [ { "name": "line", "transport": { "port": "/dev/ttyUSB0" } } ] } ],
          "alerts": { "routes": [ {{routes}} ] } }
        """);

    [Fact]
    public async Task Ask_ChangedRoutes_AreInUseAndAFaultyFileChangesNothing()
    {
        Write("");
        var options = ConfigurationFile.Load(_path);
        await using var dispatch = new AlertDispatch(new AlertRules(), null, TimeProvider.System, NullLogger.Instance);
        dispatch.Use(turned => RouteFactory.Make(options.Alerts, TimeProvider.System, NullLogger.Instance, turned));
        var logger = new ListLogger();
        await using var reload = new SettingsReload(_path, options, dispatch, TimeProvider.System, logger);

        Write("""{ "kind": "command", "name": "pager", "command": { "program": "/bin/true" } }""");
        reload.Ask();
        await Patience.UntilAsync(() => dispatch.Health.Count == 1);
        Assert.Equal("pager", dispatch.Health[0].Name);

        Write("""{ "kind": "command", "name": "pager" }""");
        reload.Ask();
        await Patience.UntilAsync(() => logger.Events.Contains("SettingsRefused"));
        Assert.Equal("pager", Assert.Single(dispatch.Health).Name);

        Write("""{ "kind": "webhook", "name": "hook", "webhook": { "url": "http://127.0.0.1:9/", "secretFile": "/nonexistent/secret" } }""");
        reload.Ask();
        await Patience.UntilAsync(() => logger.Events.Count(name => name == "SettingsRefused") == 2);
        Assert.Equal("pager", Assert.Single(dispatch.Health).Name);
    }

    internal sealed class ListLogger : ILogger
    {
        private readonly List<string> _events = [];

        public IReadOnlyList<string> Events
        {
            get
            {
                lock (_events)
                {
                    return [.. _events];
                }
            }
        }

        public IDisposable? BeginScope<TState>(TState state)
            where TState : notnull => null;

        public bool IsEnabled(LogLevel logLevel) => true;

        public void Log<TState>(LogLevel logLevel, EventId eventId, TState state, Exception? exception, Func<TState, Exception?, string> formatter)
        {
            lock (_events)
            {
                _events.Add(eventId.Name ?? "");
            }
        }
    }
}
