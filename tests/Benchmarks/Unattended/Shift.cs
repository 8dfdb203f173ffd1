using System.Diagnostics;
using System.Globalization;
using Lampwarden.Host.Recording;
using Lampwarden.Simulator.Benches;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Benchmarks.Unattended;

/// <summary>The service as a process of its own over one simulated bench at life's own pace, with a record folder that outlives it.</summary>
internal sealed class Shift : IAsyncDisposable
{
    public const string Bench = "loading-dock";

    private readonly List<Process> _processes = [];
    private readonly DirectoryInfo? _own;
    private readonly SimulatedRig _rig;
    private readonly string _log = "";

    private Shift(SimulatedRig rig, string? folder)
    {
        _rig = rig;
        _own = folder is null ? Directory.CreateTempSubdirectory("lw-fault-") : null;
        Folder = folder ?? _own!.FullName;
        Config = Path.Combine(Path.GetTempPath(), $"lw-fault-{Guid.NewGuid():N}.json");
    }

    public string Folder { get; }

    public string Config { get; }

    public int Asked => _rig.Asked;

    public string Errors { get; private set; } = "";

    public Process Process => _processes[^1];

    /// <summary>Prepares a bench; <paramref name="with"/> scripts what will happen to it.</summary>
    public static Shift Prepare(Action<Scenario>? with = null, string? folder = null)
    {
        var scenario = new Scenario { Name = Bench, Mains = "230 V 50 Hz", Bank = "150 W", Unit = "resistor 900 ohm", SwitchOnSeconds = 0, EndSeconds = 3000 };
        scenario.Meter.ReadingsPerSecond = 10;
        with?.Invoke(scenario);
        return new Shift(new SimulatedRig(scenario, TimeProvider.System), folder);
    }

    /// <summary>A trouble of the meter from a second on.</summary>
    public static Action<Scenario> Trouble(MeterTrouble kind, double at, double seconds) =>
        scenario => scenario.Meter.Troubles.Add(new ScheduledTrouble { Kind = kind, AtSeconds = at, ForSeconds = seconds });

    /// <summary>A short of the unit at a second.</summary>
    public static Action<Scenario> Short(double at) => scenario => scenario.Faults.Add(new ScenarioFault { AtSeconds = at, Kind = "hard-short" });

    public void Write(string alerts = "{}", string more = "") => File.WriteAllText(Config, $$"""
        { "benches": [ { "name": "{{Bench}}", "mains": "230 V 50 Hz", "bank": "150 W", "unit": "resistor 900 ohm",
            "meters": [ { "name": "line", "transport": { "port": "{{_rig.Meters[0].Place}}" }, "readingsPerSecond": 10 } ] } ],
          "alerts": {{alerts}}{{more}} }
        """);

    /// <summary>Starts the service and waits for some readings.</summary>
    public async Task StartAsync(string alerts = "{}", string more = "", int readings = 15, params string[] words)
    {
        Write(alerts, more);
        Launch(words);
        var before = Asked;
        await Wait.UntilAsync(() => Asked >= before + readings || Process.HasExited, "the service reads its meter");
    }

    /// <summary>Starts the service with the configuration as it lies there.</summary>
    public void Launch(params string[] words)
    {
        var start = new ProcessStartInfo("dotnet", [Path.Combine(AppContext.BaseDirectory, "lampwarden.dll"), "watch", "--config", Config, "--record", Folder, "--no-page", .. words])
        {
            RedirectStandardOutput = true,
            RedirectStandardError = true,
        };
        var process = Process.Start(start)!;
        process.OutputDataReceived += (_, _) => { };
        process.ErrorDataReceived += (_, line) => Errors += line.Data + "\n";
        process.BeginOutputReadLine();
        process.BeginErrorReadLine();
        _processes.Add(process);
    }

    public async Task SignalAsync(string signal)
    {
        using var kill = Process.Start("kill", ["-" + signal, Process.Id.ToString(CultureInfo.InvariantCulture)]);
        await kill.WaitForExitAsync();
    }

    /// <summary>Ends the service in good order.</summary>
    public async Task StopAsync()
    {
        if (!Process.HasExited)
        {
            await SignalAsync("TERM");
            await Process.WaitForExitAsync();
        }
    }

    public async Task KillAsync()
    {
        Process.Kill();
        await Process.WaitForExitAsync();
    }

    /// <summary>Looks into the store.</summary>
    public T Review<T>(Func<SoakStore, T> look)
    {
        using var store = SoakStore.Open(Folder, TimeProvider.System, StoreMode.Review);
        return look(store);
    }

    /// <summary>The only run, or the last.</summary>
    public RunRecord Run => Review(store => store.Run(store.Runs().OrderBy(run => run.Run, StringComparer.Ordinal).Last().Run));

    /// <summary>Polls stored against polls asked for: in words, after checking that none is missing.</summary>
    public string Balance(int slack = 12)
    {
        var stored = Review(store => store.Runs().Sum(run => store.Readings(run.Run).Count()));
        BrokenPromiseException.Unless(stored >= Asked - slack, $"{Asked} polls, but only {stored} entries stored");
        return $"{Asked} polls asked for, {stored} entries stored";
    }

    public string LogText => string.Concat(Directory.Exists(Path.Combine(Folder, "log"))
        ? Directory.GetFiles(Path.Combine(Folder, "log")).Select(path => new StreamReader(new FileStream(path, FileMode.Open, FileAccess.Read, FileShare.ReadWrite)).ReadToEnd())
        : [_log]);

    public async ValueTask DisposeAsync()
    {
        foreach (var process in _processes)
        {
            if (!process.HasExited)
            {
                process.Kill();
                await process.WaitForExitAsync();
            }

            process.Dispose();
        }

        await _rig.DisposeAsync();
        File.Delete(Config);
        _own?.Delete(recursive: true);
    }
}
