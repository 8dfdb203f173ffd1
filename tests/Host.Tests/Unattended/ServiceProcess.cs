using System.Diagnostics;
using System.Globalization;
using Lampwarden.Host.Tests.Recording;
using Lampwarden.Simulator.Benches;

namespace Lampwarden.Host.Tests.Unattended;

/// <summary>The service as a process of its own, watching a simulated bench at life's own pace.</summary>
internal sealed class ServiceProcess : IAsyncDisposable
{
    private readonly Process _process;

    private ServiceProcess(Process process) => _process = process;

    public int ExitCode => _process.ExitCode;

    /// <summary>A bench whose meters answer ten times a second.</summary>
    public static SimulatedRig Rig() => new(
        new Scenario { Name = "attic", Mains = "230 V 50 Hz", Bank = "150 W", Unit = "resistor 900 ohm", SwitchOnSeconds = 0, EndSeconds = 3000 },
        TimeProvider.System);

    /// <summary>Starts <c>watch</c> with more configuration and environment.</summary>
    public static async Task<ServiceProcess> StartAsync(TempFolder folder, SimulatedRig rig, string more = "", string[]? words = null, params (string Name, string Value)[] environment)
    {
        var config = await WriteConfigAsync(folder, rig, more);
        return Start([Path.Combine(AppContext.BaseDirectory, "lampwarden.dll"), "watch", "--config", config, "--record", folder.Path, .. words ?? ["--no-page"]], environment);
    }

    /// <summary>Starts the service with a loop that hangs after so many readings.</summary>
    public static async Task<ServiceProcess> StartHangingAsync(TempFolder folder, SimulatedRig rig, int readings, string more) => Start(
        [Path.Combine(AppContext.BaseDirectory, "Lampwarden.CrashChild.dll"), "hang", await WriteConfigAsync(folder, rig, more), folder.Path, readings.ToString(CultureInfo.InvariantCulture)], []);

    /// <summary>Waits for it to end by itself.</summary>
    public Task EndedAsync() => _process.WaitForExitAsync(TestContext.Current.CancellationToken);

    private static async Task<string> WriteConfigAsync(TempFolder folder, SimulatedRig rig, string more)
    {
        var config = Path.Combine(folder.Path, "bench.json");
        await File.WriteAllTextAsync(config, $$"""
            { "benches": [ { "name": "attic", "mains": "230 V 50 Hz", "bank": "150 W", "unit": "resistor 900 ohm",
                "meters": [ { "name": "line", "transport": { "port": "{{rig.Meters[0].Place}}" }, "readingsPerSecond": 10 } ] } ]{{more}} }
            """, TestContext.Current.CancellationToken);
        return config;
    }

    private static ServiceProcess Start(string[] words, (string Name, string Value)[] environment)
    {
        var start = new ProcessStartInfo("dotnet", words)
        {
            RedirectStandardOutput = true,
            RedirectStandardError = true,
        };
        foreach (var (name, value) in environment)
        {
            start.Environment[name] = value;
        }

        var process = Process.Start(start)!;
        // Read away, or a full pipe would hold the service up.
        process.OutputDataReceived += (_, _) => { };
        process.ErrorDataReceived += (_, _) => { };
        process.BeginOutputReadLine();
        process.BeginErrorReadLine();
        return new ServiceProcess(process);
    }

    /// <summary>Waits until the meter was asked so often.</summary>
    public static async Task AskedAsync(SimulatedRig rig, int times)
    {
        while (rig.Asked < times)
        {
            await Task.Delay(20, TestContext.Current.CancellationToken);
        }
    }

    /// <summary>kill -9.</summary>
    public async Task KillAsync()
    {
        _process.Kill();
        await _process.WaitForExitAsync(TestContext.Current.CancellationToken);
    }

    /// <summary>Any other signal.</summary>
    public async Task SignalAsync(string signal, bool andWait = true)
    {
        using var kill = Process.Start("kill", ["-" + signal, _process.Id.ToString(CultureInfo.InvariantCulture)]);
        await kill.WaitForExitAsync(TestContext.Current.CancellationToken);
        if (andWait)
        {
            await _process.WaitForExitAsync(TestContext.Current.CancellationToken);
        }
    }

    public async ValueTask DisposeAsync()
    {
        if (!_process.HasExited)
        {
            _process.Kill();
            await _process.WaitForExitAsync(CancellationToken.None);
        }

        _process.Dispose();
    }
}
