using System.Text.Json;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Tests.Commands;
using Lampwarden.Host.Tests.Recording;

namespace Lampwarden.Host.Tests.Soaking;

/// <summary>The whole house, from meter bytes on a real pseudo-terminal to the stored verdict.</summary>
public sealed class RehearsalTests
{
    [Fact]
    public async Task Rehearse_DevelopingShort_IsWarnedOfStoredAndJudged()
    {
        using var folder = new TempFolder();
        var scenario = await WriteAsync(folder, """
            { "name": "attic", "mains": "230 V 50 Hz", "bank": "150 W", "unit": "resistor 900 ohm", "seed": 3, "endSeconds": 600, "mainsMeasured": true,
              "faults": [ { "atSeconds": 330, "kind": "developing-short", "minutes": 2 } ] }
            """);

        var said = await Cli.RunAsync("rehearse", scenario, "--record", folder.Path, "--speed", "80", "--json");

        Assert.Equal(0, said.Code);
        var document = said.Json;
        Assert.Equal("failed", document.GetProperty("verdict").GetString());
        // On a busy machine the meter may fall silent for moments: that is told too, and is none of the unit's business.
        var warning = document.GetProperty("findings").EnumerateArray().First(finding => finding.GetProperty("signature").GetString() is "developing-short" or "hard-short" or "runaway");
        // The fault begins 328 s after switch-on; the bank would be fully lit some five minutes later.
        Assert.InRange(warning.GetProperty("raisedSeconds").GetDouble(), 320, 420);
        Assert.Contains("The alert is stored and told", said.Error, StringComparison.Ordinal);

        using var store = SoakStore.Open(folder.Path, TimeProvider.System, StoreMode.Review);
        var run = store.Run(document.GetProperty("run").GetString()!);
        Assert.Equal(document.GetProperty("findings").GetArrayLength(), run.Findings.Count);
        var readings = store.Readings(run.Info.Run).Count(reading => !reading.IsMissing);
        Assert.Equal(document.GetProperty("readings").GetInt64(), readings);
        Assert.InRange(readings, 500, 1300);
    }

    [Fact]
    public async Task Rehearse_PulledCable_LeavesAGapAnAlertAndARecovery()
    {
        using var folder = new TempFolder();
        var scenario = await WriteAsync(folder, """
            { "name": "attic", "mains": "230 V 50 Hz", "bank": "150 W", "unit": "resistor 900 ohm", "seed": 4, "endSeconds": 120,
              "faults": [ { "atSeconds": 40, "kind": "meter-unplugged", "forSeconds": 20 } ],
              "expect": { "findings": [ "meter-silent" ] } }
            """);

        var said = await Cli.RunAsync("rehearse", scenario, "--record", folder.Path, "--speed", "10", "--json");

        Assert.Equal(0, said.Code);
        var gap = said.Json.GetProperty("gaps").EnumerateArray().MaxBy(gap => gap.GetProperty("toSeconds").GetDouble() - gap.GetProperty("fromSeconds").GetDouble());
        Assert.InRange(gap.GetProperty("fromSeconds").GetDouble(), 30, 45);
        var silent = said.Json.GetProperty("findings").EnumerateArray().First(finding => finding.GetProperty("signature").GetString() == "meter-silent");
        // The cable is back 58 s after switch-on; reopening may wait up to five seconds more.
        Assert.InRange(silent.GetProperty("clearedSeconds").GetDouble(), 56, 75);
        Assert.Contains("gives no reading: disconnected", said.Error, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Rehearse_WhatWasNotAnnounced_AnswersNo()
    {
        using var folder = new TempFolder();
        var scenario = await WriteAsync(folder, """
            { "name": "attic", "mains": "230 V 50 Hz", "bank": "150 W", "unit": "resistor 900 ohm", "endSeconds": 30,
              "expect": { "findings": [ "hard-short" ] } }
            """);
        var said = await Cli.RunAsync("rehearse", scenario, "--record", folder.Path, "--speed", "20");
        Assert.Equal(1, said.Code);
        Assert.Contains("NOT AS THE SCENARIO ANNOUNCES: no finding hard-short", said.Output, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Replay_OfAStoredRun_GivesTheSameFindings()
    {
        using var folder = new TempFolder();
        var scenario = await WriteAsync(folder, """
            { "name": "attic", "mains": "230 V 50 Hz", "bank": "150 W", "unit": "resistor 900 ohm", "seed": 6, "endSeconds": 200, "mainsMeasured": true,
              "faults": [ { "atSeconds": 120, "kind": "hard-short" } ], "expect": { "findings": [ "hard-short" ] } }
            """);
        var live = await Cli.RunAsync("rehearse", scenario, "--record", folder.Path, "--speed", "40", "--json");
        Assert.Equal(0, live.Code);

        using var store = SoakStore.Open(folder.Path, TimeProvider.System, StoreMode.Review);
        var run = store.Run(live.Json.GetProperty("run").GetString()!);
        var plan = Lampwarden.Host.Soaking.BenchPlan.From(
            JsonSerializer.Deserialize<Lampwarden.Host.Configuration.BenchOptions>(run.ConfigurationJson, Lampwarden.Host.Commands.Json.Compact)!,
            Lampwarden.Analysis.Lamps.LampInventory.Empty);
        var ledger = new Lampwarden.Host.Soaking.SoakLedger(plan.WatchSettings);
        foreach (var reading in store.Readings(run.Info.Run))
        {
            ledger.Take(new Lampwarden.Analysis.Watching.Observation(reading.Seconds, reading.Amps, reading.MainsVolts), "stored");
        }

        var replayed = ledger.Close(ledger.LastSeconds).Document.Findings;
        Assert.Equal(
            JsonSerializer.Serialize(live.Json.GetProperty("findings"), Lampwarden.Host.Commands.Json.Compact),
            JsonSerializer.Serialize(replayed, Lampwarden.Host.Commands.Json.Compact));
    }

    private static async Task<string> WriteAsync(TempFolder folder, string scenario)
    {
        var path = Path.Combine(folder.Path, "scenario.json");
        await File.WriteAllTextAsync(path, scenario, TestContext.Current.CancellationToken);
        return path;
    }
}
