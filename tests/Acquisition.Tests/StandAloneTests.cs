using System.Globalization;
using Lampwarden.Acquisition.Tests.Support;
using Lampwarden.Simulator;

namespace Lampwarden.Acquisition.Tests;

/// <summary>The simulator as a program of its own, read by a session that knows nothing of it but the place it printed.</summary>
public sealed class StandAloneTests
{
    private const string Scenario = """
        { "name": "t", "mains": "230 V 50 Hz", "bank": "150 W 230 V", "unit": "resistor 900 ohm", "endSeconds": 3600, "switchOnSeconds": 0,
          "mainsMeasured": true, "meter": { "readingsPerSecond": 20, "dialect": "DIALECT", "echo": true,
          "troubles": [ { "kind": "silent", "atSeconds": 2, "forSeconds": 2 } ] } }
        """;

    [Theory]
    [InlineData("scpi")]
    [InlineData("columns")]
    public async Task RunAsync_ScenarioWithTroubleOnTcp_CanBeReadLikeAnyMeterAndHasTheTrouble(string dialect)
    {
        using var stop = new CancellationTokenSource();
        var output = new FirstLines();
        var running = StandAlone.RunAsync(["--scenario", await FileAsync(dialect), "--tcp", "0"], output, TextWriter.Null, stop.Token);
        var place = await output.Line.Task.WaitAsync(TestBench.Deadline, TestContext.Current.CancellationToken);
        Assert.StartsWith("line tcp 127.0.0.1:", place, StringComparison.Ordinal);
        var options = new MeterOptions { Name = "line", ReadingsPerSecond = 20, ReplyTimeoutSeconds = 0.5, Transport = { Kind = "tcp", Port = place.Split(':')[1] } };
        if (dialect != "scpi")
        {
            options.Protocol = Examples.Meter(dialect).Protocol;
        }

        await using var session = new MeterSession(options, TimeProvider.System);
        var seen = new List<MeterEvent>();
        await foreach (var one in session.ReadAsync(TestContext.Current.CancellationToken))
        {
            seen.Add(one);
            if (one.Kind == MeterEventKind.Reading && seen.Exists(gap => gap.Reason == GapReason.NoAnswer))
            {
                break;
            }
        }

        Assert.InRange(seen[^1].Value, 0.15, 0.3); // a 900 ohm unit behind 150 W
        await stop.CancelAsync();
        Assert.Equal(0, await running);
    }

    [Theory]
    [InlineData("no such scenario file", "--scenario", "nowhere.json", "--pty")]
    [InlineData("A scenario and a wire must be given", "--pty")]
    [InlineData("'--loud' is not understood here", "--loud")]
    public async Task RunAsync_BadCommandLine_SaysWhatIsWrongAndReturns2(string why, params string[] args)
    {
        var error = new StringWriter();

        Assert.Equal(2, await StandAlone.RunAsync(args, TextWriter.Null, error, TestContext.Current.CancellationToken));
        Assert.Contains(why, error.ToString(), StringComparison.Ordinal);
    }

    private static async Task<string> FileAsync(string dialect)
    {
        var path = Path.Combine(Directory.CreateTempSubdirectory("lampwarden-scenario-").FullName, "t.json");
        await File.WriteAllTextAsync(path, Scenario.Replace("DIALECT", dialect, StringComparison.Ordinal), TestContext.Current.CancellationToken);
        return path;
    }

    private sealed class FirstLines : StringWriter
    {
        public FirstLines()
            : base(CultureInfo.InvariantCulture)
        {
        }

        public TaskCompletionSource<string> Line { get; } = new(TaskCreationOptions.RunContinuationsAsynchronously);

        public override Task WriteLineAsync(string? value)
        {
            Line.TrySetResult(value!);
            return Task.CompletedTask;
        }
    }
}
