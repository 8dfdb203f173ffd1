using System.CommandLine;
using System.Globalization;
using Lampwarden.Acquisition;
using Lampwarden.Acquisition.Transport;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Commands;

/// <summary><c>check</c>: opens every configured meter, asks who it is, takes a few readings, and says what it would warn about.</summary>
internal sealed class CheckCommand : CliCommand
{
    private const double ShortestSeconds = 5;
    private const double PatiencePeriods = 3;
    private readonly Option<string> _config = CommonOptions.Config();
    private readonly Option<int> _count = new("--readings") { Description = "Readings to take from each meter, 1 to 1000", HelpName = "N", DefaultValueFactory = _ => 10 };

    public CheckCommand()
        : base("check", "Check the configuration and every meter in it")
    {
        Add(_config);
        Add(_count);
    }

    protected override async Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var count = parsed.GetValue(_count);
        if (count is not (>= 1 and <= 1000))
        {
            throw new BadInputException(string.Create(CultureInfo.InvariantCulture, $"--readings is {count}; expected 1 to 1000."));
        }

        var options = ConfigurationFile.Load(parsed.GetValue(_config)!);
        terminal.Prose.WriteLine($"{parsed.GetValue(_config)} is in order. Asking each meter for {count} readings.");
        var checks = await Task.WhenAll(options.Benches.SelectMany(bench => bench.Meters.Select(meter => CheckAsync(bench.Name, meter, count, cancellation))));
        var document = new CheckDocument(checks, SerialPorts.List());
        foreach (var check in checks)
        {
            Tell(terminal.Prose, check);
        }

        terminal.Prose.WriteLine(document.Ports.Count == 0 ? "No serial ports were found." : "Serial ports found:");
        foreach (var port in document.Ports)
        {
            terminal.Prose.WriteLine("  " + port);
        }

        if (terminal.WantsJson)
        {
            terminal.WriteJson(document);
        }

        return checks.All(check => check.Ok) ? ExitCode.Done : ExitCode.Trouble;
    }

    private static async Task<MeterCheck> CheckAsync(string bench, MeterOptions meter, int count, CancellationToken cancellation)
    {
        await using var session = new MeterSession(meter, TimeProvider.System);
        using var ending = CancellationTokenSource.CreateLinkedTokenSource(cancellation);
        ending.CancelAfter(TimeSpan.FromSeconds(ShortestSeconds + meter.ReplyTimeoutSeconds + (PatiencePeriods * count / meter.ReadingsPerSecond)));
        var readings = new List<double>();
        var gaps = new List<string>();
        var broken = false;
        try
        {
            await foreach (var one in session.ReadAsync(ending.Token))
            {
                if (one.Kind != MeterEventKind.Gap)
                {
                    readings.Add(one.Value);
                }
                else if (!gaps.Contains(one.Detail!))
                {
                    broken |= readings.Count > 0;
                    gaps.Add(one.Detail!);
                }

                if (readings.Count == count)
                {
                    break;
                }
            }
        }
        catch (OperationCanceledException) when (!cancellation.IsCancellationRequested)
        {
            gaps.Add(string.Create(CultureInfo.InvariantCulture, $"only {readings.Count} of {count} readings came in time"));
        }

        var health = session.Health;
        return new MeterCheck(meter.Name, bench, readings.Count == count && !broken, health.Identity, readings,
            health.RatePerSecond, health.JitterSeconds * 1000, health.LatencySeconds * 1000, [.. health.Problems.Union(gaps), .. Slow(meter, health)]);
    }

    private static IEnumerable<string> Slow(MeterOptions meter, MeterHealth health)
    {
        if (health.RatePerSecond < 0.8 * meter.ReadingsPerSecond)
        {
            yield return string.Create(CultureInfo.InvariantCulture,
                $"{meter.ReadingsPerSecond} readings a second are expected and {health.RatePerSecond:0.0} came; an answer takes {health.LatencySeconds * 1000:0} ms.");
        }
    }

    private static void Tell(TextWriter prose, MeterCheck check)
    {
        prose.WriteLine($"{check.Bench}, meter {check.Name}: {(check.Ok ? "good" : "NOT GOOD")}");
        prose.WriteLine($"  it is       {check.Identity ?? "a meter that does not say its name"}");
        prose.WriteLine($"  readings    {(check.Readings.Count == 0 ? "none" : string.Join(' ', check.Readings.Select(value => double.IsNaN(value) ? "overload" : value.ToString("0.######", CultureInfo.InvariantCulture))))}");
        if (!double.IsNaN(check.RatePerSecond))
        {
            prose.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"  timing      {check.RatePerSecond:0.00} a second, jitter {check.JitterMs:0.0} ms, question to answer {check.LatencyMs:0.0} ms"));
        }

        foreach (var problem in check.Problems)
        {
            prose.WriteLine("  mind        " + problem);
        }
    }
}
