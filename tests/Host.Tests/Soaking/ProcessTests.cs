using System.Diagnostics;
using System.Text.Json;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Tests.Recording;
using Lampwarden.Simulator.Benches;

namespace Lampwarden.Host.Tests.Soaking;

/// <summary>The service as a process of its own, watching a simulated bench over a pseudo-terminal at life's own pace.</summary>
public sealed class ProcessTests : IDisposable
{
    private const int TenReadings = 10;

    private readonly TempFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public async Task Watch_KilledHardInMidRun_HasStoredAllButTheLastSecond()
    {
        Outside.Need(!OperatingSystem.IsWindows(), "the process is killed by a signal");
        await using var rig = Rig();
        using var watch = await StartAsync(rig);
        var asked = await AskedAsync(rig, 5 * TenReadings);
        watch.Kill();
        await watch.WaitForExitAsync(TestContext.Current.CancellationToken);

        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        var run = Assert.Single(store.Runs());
        Assert.Equal(Verdict.Incomplete, run.Verdict);
        // Ten readings a second: one second may be lost, and the last answer may still have been on the wire.
        Assert.InRange(store.Readings(run.Run).Count(), asked - TenReadings - 2, asked + TenReadings);
    }

    [Fact]
    public async Task Watch_ToldToTerminate_ClosesTheRunAndSaysInterrupted()
    {
        Outside.Need(!OperatingSystem.IsWindows(), "the process is ended by a signal");
        await using var rig = Rig();
        using var watch = await StartAsync(rig);
        await AskedAsync(rig, 2 * TenReadings);
        using (var kill = Process.Start("kill", ["-TERM", FormattableString.Invariant($"{watch.Id}")]))
        {
            await kill.WaitForExitAsync(TestContext.Current.CancellationToken);
        }

        var output = await watch.StandardOutput.ReadToEndAsync(TestContext.Current.CancellationToken);
        await watch.WaitForExitAsync(TestContext.Current.CancellationToken);
        Assert.Equal(130, watch.ExitCode);
        var document = JsonDocument.Parse(output).RootElement;
        Assert.Equal("incomplete", document.GetProperty("verdict").GetString());
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System, StoreMode.Review);
        var run = Assert.Single(store.Runs());
        Assert.Equal(document.GetProperty("readings").GetInt64(), store.Readings(run.Run).Count(reading => !reading.IsMissing));
    }

    private static SimulatedRig Rig() => new(
        new Scenario { Name = "attic", Mains = "230 V 50 Hz", Bank = "150 W", Unit = "resistor 900 ohm", SwitchOnSeconds = 0, EndSeconds = 600 },
        TimeProvider.System);

    private static async Task<int> AskedAsync(SimulatedRig rig, int atLeast)
    {
        while (rig.Asked < atLeast)
        {
            await Task.Delay(20, TestContext.Current.CancellationToken);
        }

        return rig.Asked;
    }

    private async Task<Process> StartAsync(SimulatedRig rig)
    {
        var config = Path.Combine(_folder.Path, "bench.json");
        await File.WriteAllTextAsync(config, $$"""
            { "benches": [ { "name": "attic", "mains": "230 V 50 Hz", "bank": "150 W", "unit": "resistor 900 ohm",
                "meters": [ { "name": "line", "transport": { "port": "{{rig.Meters[0].Place}}" }, "readingsPerSecond": {{TenReadings}} } ] } ] }
            """, TestContext.Current.CancellationToken);
        var start = new ProcessStartInfo("dotnet") { RedirectStandardOutput = true, RedirectStandardError = true };
        foreach (var word in new[] { Path.Combine(AppContext.BaseDirectory, "lampwarden.dll"), "watch", "--config", config, "--record", _folder.Path, "--json", "--no-page" })
        {
            start.ArgumentList.Add(word);
        }

        var process = Process.Start(start)!;
        // Read away, or a full pipe would hold the service up.
        process.ErrorDataReceived += (_, _) => { };
        process.BeginErrorReadLine();
        return process;
    }
}
