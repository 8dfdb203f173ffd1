using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Tests.Configuration;

public sealed class AlertsCheckTests : IDisposable
{
    private readonly string _path = Path.GetTempFileName();

    public void Dispose() => File.Delete(_path);

    private string[] Faults(string alerts)
    {
        File.WriteAllText(_path, $$"""
            { "benches": [ { "name": "attic", "mains": "230 V 50 Hz", "bank": "150 W", "unit": "resistor 900 ohm",
                "meters": [ { "name": "line", "transport": { "port": "/dev/ttyUSB0" } } ] } ],
              "alerts": {{alerts}} }
            """);
        try
        {
            ConfigurationFile.Load(_path);
            return [];
        }
        catch (ConfigurationException error)
        {
            return [.. error.Faults.Select(fault => fault.ToString())];
        }
    }

    [Fact]
    public void Load_EveryKindOfRoute_HasNoFault() => Assert.Empty(Faults("""
        { "instance": "shop-1", "latch": [ "open-circuit" ], "routes": [
            { "kind": "webhook", "webhook": { "url": "https://hooks.example.org/bench", "secretVariable": "SHOP_SECRET" } },
            { "kind": "mail", "minimumSeverity": "critical", "mail": { "host": "mail.example.org", "from": "bench@example.org", "to": [ "Night Shift <night@example.org>" ], "user": "bench", "passwordFile": "secret" } },
            { "kind": "mqtt", "mqtt": { "host": "127.0.0.1" } },
            { "kind": "command", "name": "pager", "afterRepeats": 2, "command": { "program": "/usr/local/bin/page", "arguments": [ "-u" ] } } ],
          "cutOff": { "trips": [ "hard-short" ], "outputs": [ { "bench": "attic", "port": "4001", "openText": "OPEN\\n", "keepAliveText": "HOLD\\n" } ] } }
        """));

    [Theory]
    [InlineData("""{ "routes": [ { "kind": "pigeon" } ] }""", "alerts.routes[0].kind is 'pigeon': must be one of log, webhook, mail, mqtt, command")]
    [InlineData("""{ "routes": [ { "kind": "webhook" } ] }""", "alerts.routes[0].webhook: must be given")]
    [InlineData("""{ "routes": [ { "kind": "webhook", "webhook": { "url": "ftp://x.example/" } } ] }""", "alerts.routes[0].webhook.url is 'ftp://x.example/': must begin with http:// or https://")]
    [InlineData("""{ "routes": [ { "kind": "mail", "mail": { "host": "m", "from": "bench@example.org" } } ] }""", "alerts.routes[0].mail.to: must name at least one address")]
    [InlineData("""{ "routes": [ { "kind": "mail", "mail": { "host": "m", "from": "no at sign at all <", "to": [ "a@example.org" ] } } ] }""", "must be a mail address")]
    [InlineData("""{ "routes": [ { "kind": "mail", "mail": { "host": "m.example", "tls": "none", "user": "u", "passwordFile": "p", "from": "b@example.org", "to": [ "a@example.org" ] } } ] }""", "a password is not sent in the clear")]
    [InlineData("""{ "routes": [ { "kind": "mail", "mail": { "host": "m.example", "user": "u", "from": "b@example.org", "to": [ "a@example.org" ] } } ] }""", "passwordFile: must be given (or passwordVariable) where user is")]
    [InlineData("""{ "routes": [ { "kind": "mqtt", "mqtt": { "host": "h", "topic": "a/#" } } ] }""", "alerts.routes[0].mqtt.topic is 'a/#'")]
    [InlineData("""{ "routes": [ { "kind": "command", "command": { "program": "/bin/true" } }, { "kind": "command", "command": { "program": "/bin/true" } } ] }""", "alerts.routes[1].name is 'command': must be unique among the routes")]
    [InlineData("""{ "routes": [ { "kind": "command", "afterRepeats": 1, "command": { "program": "/bin/true" } } ] }""", "every route waits for repeats")]
    [InlineData("""{ "routes": [ { "kind": "command", "atMostPerMinute": 0, "command": { "program": "/bin/true" } } ] }""", "atMostPerMinute is '0': must lie between 1 and 600")]
    [InlineData("""{ "latch": [ "hard-shirt" ] }""", "alerts.latch[0] is 'hard-shirt': must be one of hard-short")]
    [InlineData("""{ "cutOff": { "outputs": [ { "bench": "attic", "port": "4001", "openText": "X" } ] } }""", "alerts.cutOff.trips: must name the signatures")]
    [InlineData("""{ "cutOff": { "trips": [ "hard-short" ], "outputs": [ { "bench": "cellar", "port": "4001", "openText": "X" } ] } }""", "alerts.cutOff.outputs[0].bench is 'cellar': must be the name of a bench")]
    [InlineData("""{ "cutOff": { "trips": [ "hard-short" ], "outputs": [ { "bench": "attic", "port": "none", "openText": "X" } ] } }""", "port is 'none': must be a number between 1 and 65535")]
    [InlineData("""{ "cutOff": { "trips": [ "hard-short" ], "outputs": [ { "bench": "attic", "port": "4001" } ] } }""", "openText: must be given where there is no keepAliveText")]
    [InlineData("""{ "cutOff": { "trips": [ "hard-short" ], "outputs": [ { "bench": "attic", "port": "4001", "openText": "X", "keepAliveText": "H", "keepAliveSeconds": 4 } ] } }""", "lapseSeconds is '5': must be at least twice keepAliveSeconds")]
    public void Load_ABrokenRule_IsNamedWithItsKey(string alerts, string fault) =>
        Assert.Contains(Faults(alerts), text => text.Contains(fault, StringComparison.Ordinal));
}
