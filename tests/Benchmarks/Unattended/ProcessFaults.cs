using System.Globalization;
using System.Net;
using System.Net.Sockets;
using System.Text;

namespace Lampwarden.Benchmarks.Unattended;

/// <summary>Faults of the process, its clock, its settings, and the cut-off.</summary>
internal static class ProcessFaults
{
    public static IEnumerable<Fault> All =>
    [
        new("process", "kill -9 in mid-run, then a start with --resume", "at most a second of readings lost; the run is carried on with a gap on record", KilledAsync),
        new("process", "SIGTERM, then a start with --resume (an upgrade)", "nothing lost; the run is carried on with a gap on record", UpgradedAsync),
        new("process", "stopped (SIGSTOP) for 8 s, then let go on", "the missed polls are a gap with the service's own reason; the service goes on", StoppedAsync),
        new("process", "kill -9 while an alert stands unacknowledged, then a start with --resume", "the alert is still there and still unacknowledged", AlertOutlivesAsync),
        new("settings", "the file is changed to one with faults, and SIGHUP", "the settings in force stay, the fault is logged, the run goes on", FaultySettingsAsync),
        new("settings", "a route is added while a run goes on, then the unit shorts", "the new route tells of it; the run is not interrupted", NewRouteAsync),
        new("settings", "the file with the webhook's secret is not there", "a refusal to start that names the key, exit code 2", NoSecretAsync),
        new("cut-off", "the unit shorts with a contactor on TCP", "the contactor is opened, answered, and the trip is on record with its evidence", TripAsync),
        new("cut-off", "the contactor cannot be reached when it must open", "tried without end; people are told that it does not answer; it opens when it is back", LateContactorAsync),
        new("cut-off", "the service is killed and started again after a trip", "it stays tripped and opens once more; nothing closes by itself", TripOutlivesAsync),
        new("clock", "the wall clock is set back two hours between a kill and a start with --resume", "the soak's own time never goes backwards", ClockBackAsync),
    ];

    private static async Task<string> KilledAsync()
    {
        await using var shift = Shift.Prepare();
        await shift.StartAsync(readings: 30);
        await shift.KillAsync();
        await shift.StartAsync(readings: 15, words: "--resume");
        await shift.StopAsync();
        return Carried(shift) + "; " + shift.Balance();
    }

    private static async Task<string> UpgradedAsync()
    {
        await using var shift = Shift.Prepare();
        await shift.StartAsync(readings: 30);
        await shift.StopAsync();
        await shift.StartAsync(readings: 15, words: "--resume");
        await shift.StopAsync();
        return Carried(shift) + "; " + shift.Balance(3);
    }

    private static string Carried(Shift shift)
    {
        var runs = shift.Review(store => store.Runs().OrderBy(run => run.Run, StringComparer.Ordinal).ToList());
        BrokenPromiseException.Unless(runs.Count == 2 && runs[1].ResumedFrom == runs[0].Run && runs[1].StartedUtc == runs[0].StartedUtc, "the run was not carried on");
        BrokenPromiseException.Unless(shift.Run.Gaps.Any(gap => gap.Reason == "service-down"), "no gap service-down on record");
        return "second run linked to the first, gap service-down on record";
    }

    private static async Task<string> StoppedAsync()
    {
        await using var shift = Shift.Prepare();
        await shift.StartAsync(readings: 30);
        await shift.SignalAsync("STOP");
        await Task.Delay(TimeSpan.FromSeconds(8));
        await shift.SignalAsync("CONT");
        var asked = shift.Asked;
        await Wait.UntilAsync(() => shift.Asked > asked + 20, "it reads again");
        await shift.StopAsync();
        var run = shift.Run;
        BrokenPromiseException.Unless(run.Gaps.Any(gap => gap.ToSeconds - gap.FromSeconds > 6), "no gap on record");
        return $"gap: {run.Gaps.MaxBy(gap => gap.ToSeconds - gap.FromSeconds)!.Reason}; reads again";
    }

    private static async Task<string> AlertOutlivesAsync()
    {
        using var inbox = new Inbox();
        await using var shift = Shift.Prepare(Shift.Short(6));
        var alerts = $$"""{ "repeatMinutes": 0.05, "repeatGrowth": 1, "routes": [ {{inbox.Route("far")}} ] }""";
        await shift.StartAsync(alerts);
        await inbox.UntilAsync(letter => letter is { Cause: "hard-short", What: "raised" }, "hard-short raised");
        await shift.KillAsync();
        var before = inbox.Letters.Count;
        await shift.StartAsync(alerts, words: "--resume");
        await Wait.UntilAsync(() => inbox.Letters.Skip(before).Any(letter => letter is { Cause: "hard-short", What: "repeated" }), "the alert is told again after the restart");
        await shift.StopAsync();
        BrokenPromiseException.Unless(!inbox.Letters.Skip(before).Any(letter => letter is { Cause: "hard-short", What: "raised" }), "it was raised anew instead of carried on");
        return "told again as 'repeated' after the restart, not raised anew";
    }

    private static async Task<string> FaultySettingsAsync()
    {
        await using var shift = Shift.Prepare();
        await shift.StartAsync();
        shift.Write("""{ "routes": [ { "kind": "pigeon" } ] }""");
        await shift.SignalAsync("HUP");
        await Wait.UntilAsync(() => shift.LogText.Contains("must be one of log, webhook", StringComparison.Ordinal), "the fault is logged");
        var asked = shift.Asked;
        await Wait.UntilAsync(() => shift.Asked > asked + 10, "it reads on");
        await shift.StopAsync();
        return "fault logged with key, value and rule; one run, " + shift.Balance();
    }

    private static async Task<string> NewRouteAsync()
    {
        using var inbox = new Inbox();
        await using var shift = Shift.Prepare(Shift.Short(14));
        await shift.StartAsync();
        shift.Write($$"""{ "routes": [ {{inbox.Route("new")}} ] }""");
        await inbox.UntilAsync(letter => letter.Cause == "hard-short", "hard-short by the new route");
        await shift.StopAsync();
        BrokenPromiseException.Unless(shift.Review(store => store.Runs().Count) == 1, "the run was interrupted");
        return "hard-short told by the new route; one run";
    }

    private static async Task<string> NoSecretAsync()
    {
        await using var shift = Shift.Prepare();
        shift.Write("""{ "routes": [ { "kind": "webhook", "webhook": { "url": "http://127.0.0.1:9/", "secretFile": "/nonexistent/secret" } } ] }""");
        shift.Launch();
        await shift.Process.WaitForExitAsync();
        BrokenPromiseException.Unless(shift.Process.ExitCode == 2 && shift.Errors.Contains("secretFile", StringComparison.Ordinal), $"exit code {shift.Process.ExitCode}: {shift.Errors}");
        return "exit code 2: " + shift.Errors.Split('\n', StringSplitOptions.RemoveEmptyEntries)[^1].Trim();
    }

    private static string CutOff(int port) => $$"""
        "cutOff": { "trips": [ "hard-short" ], "outputs": [ { "bench": "{{Shift.Bench}}", "port": "{{port}}", "openText": "OPEN\\n", "openAnswer": "OPENED" } ] }
        """;

    private static async Task<string> TripAsync()
    {
        using var contactor = new Contactor();
        await using var shift = Shift.Prepare(Shift.Short(6));
        await shift.StartAsync($$"""{ {{CutOff(contactor.Port)}} }""");
        await Wait.UntilAsync(() => contactor.Opened > 0, "the contactor is opened");
        await shift.StopAsync();
        var record = await File.ReadAllTextAsync(Path.Combine(shift.Folder, "cut-off", "record.jsonl"));
        BrokenPromiseException.Unless(record.Contains("\"signature\":\"hard-short\"", StringComparison.Ordinal) && record.Contains("Amps\":", StringComparison.Ordinal), record);
        return "opened once; record.jsonl holds the signature and its evidence";
    }

    private static async Task<string> LateContactorAsync()
    {
        using var inbox = new Inbox();
        int port;
        using (var gone = new Contactor())
        {
            port = gone.Port;
        }

        await using var shift = Shift.Prepare(Shift.Short(6));
        await shift.StartAsync($$"""{ "routes": [ {{inbox.Route("far")}} ], {{CutOff(port)}} }""");
        await inbox.UntilAsync(letter => letter.Cause == "cut-off-down", "people are told");
        using var back = new Contactor(port);
        await Wait.UntilAsync(() => back.Opened > 0, "it opens when it is back");
        await inbox.UntilAsync(letter => letter is { Cause: "cut-off-down", What: "returned" }, "people are told that it answers");
        await shift.StopAsync();
        return "told cut-off-down; opened as soon as it was back; told that it answers again";
    }

    private static async Task<string> TripOutlivesAsync()
    {
        using var contactor = new Contactor();
        await using var shift = Shift.Prepare(Shift.Short(6));
        await shift.StartAsync($$"""{ {{CutOff(contactor.Port)}} }""");
        await Wait.UntilAsync(() => contactor.Opened == 1, "the contactor is opened");
        await shift.KillAsync();
        shift.Launch();
        await Wait.UntilAsync(() => contactor.Opened >= 2, "it opens once more");
        await shift.StopAsync();
        BrokenPromiseException.Unless(contactor.Others.Count == 0, "sent: " + string.Join(' ', contactor.Others));
        return "opened again after the restart; nothing else was ever sent";
    }

    private static async Task<string> ClockBackAsync()
    {
        // The process's own clock cannot be set without privileges over the system; the store's account of the past is moved instead.
        await using var shift = Shift.Prepare();
        await shift.StartAsync(readings: 30);
        await shift.KillAsync();
        var file = Path.Combine(shift.Folder, "soaks.db");
        using (var connection = new Microsoft.Data.Sqlite.SqliteConnection($"Data Source={file};Pooling=False"))
        {
            connection.Open();
            using var command = connection.CreateCommand();
            command.CommandText = "UPDATE runs SET started_ms = started_ms + 7200000";
            command.ExecuteNonQuery();
        }

        await shift.StartAsync(readings: 15, words: "--resume");
        await shift.StopAsync();
        var runs = shift.Review(store => store.Runs().OrderBy(run => run.Run, StringComparer.Ordinal).Select(run => store.Readings(run.Run).Select(reading => reading.Seconds).ToList()).ToList());
        BrokenPromiseException.Unless(runs.Count == 2 && runs[1][0] >= runs[0][^1], $"time went backwards from {runs[0][^1]} to {runs[1][0]}");
        return string.Create(CultureInfo.InvariantCulture, $"left off at {runs[0][^1]:F1} s, carried on at {runs[1][0]:F1} s");
    }

    /// <summary>A contactor on TCP that opens when told to, and remembers everything else it was told.</summary>
    private sealed class Contactor : IDisposable
    {
        private readonly TcpListener _listener;

        public Contactor(int port = 0)
        {
            _listener = new TcpListener(IPAddress.Loopback, port);
            _listener.Start();
            Port = ((IPEndPoint)_listener.LocalEndpoint).Port;
            _ = Task.Run(AcceptAsync);
        }

        public int Port { get; }

        public int Opened { get; private set; }

        public List<string> Others { get; } = [];

        public void Dispose() => _listener.Dispose();

        private async Task AcceptAsync()
        {
            try
            {
                while (true)
                {
                    _ = TalkAsync(await _listener.AcceptTcpClientAsync());
                }
            }
            catch (Exception error) when (error is SocketException or ObjectDisposedException)
            {
                // Closed.
            }
        }

        private async Task TalkAsync(TcpClient client)
        {
            using (client)
            using (var reader = new StreamReader(client.GetStream(), Encoding.ASCII))
            {
                try
                {
                    while (await reader.ReadLineAsync() is { } line)
                    {
                        if (line == "OPEN")
                        {
                            Opened++;
                            await client.GetStream().WriteAsync("OPENED\n"u8.ToArray());
                        }
                        else
                        {
                            Others.Add(line);
                        }
                    }
                }
                catch (IOException)
                {
                    // The service was killed.
                }
            }
        }
    }
}
