using System.CommandLine;
using System.Globalization;
using Lampwarden.Acquisition;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Web;
using Lampwarden.Host.Web.Access;
using Lampwarden.Simulator;
using Lampwarden.Simulator.Benches;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Host.Commands;

/// <summary><c>rehearse</c>: the whole service against a bench that is not there, faster than life.</summary>
internal sealed class RehearseCommand : CliCommand
{
    private readonly Argument<string> _scenario = new("SCENARIO")
    {
        Description = "A scenario file, or the name of one in config/scenarios",
        DefaultValueFactory = _ => "evening-soak",
    };

    private readonly Option<string?> _record = CommonOptions.Record();
    private readonly Option<bool> _noPage = CommonOptions.NoPage();
    private readonly Option<double?> _speed = new("--speed") { Description = "How many times faster than life", HelpName = "X" };

    public RehearseCommand()
        : base("rehearse", "Run the service against the simulator: nothing is switched, nothing can be hurt")
    {
        Add(_scenario);
        Add(_record);
        Add(_noPage);
        Add(_speed);
    }

    protected override async Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var scenario = ScenarioFile.Load(Find(parsed.GetValue(_scenario)!));
        var speed = parsed.GetValue(_speed) ?? scenario.Speed;
        if (speed is not (>= 0.1 and <= 1000))
        {
            throw new BadInputException(string.Create(CultureInfo.InvariantCulture, $"--speed is {speed}; expected 0.1 to 1000."));
        }

        var prose = terminal.Prose;
        prose.WriteLine($"Rehearsal '{scenario.Name}': {scenario.About}");
        using var time = new RehearsalClock(speed, pulseEverySeconds: 1.5 / scenario.Meter.ReadingsPerSecond);
        await using var rig = new SimulatedRig(scenario, time);
        foreach (var meter in rig.Meters)
        {
            prose.WriteLine($"A simulated bench is up: its {meter.Name} meter answers at {meter.Place}.");
        }

        var options = new BenchOptions
        {
            Name = scenario.Name,
            Mains = scenario.Mains,
            Bank = scenario.Bank,
            Unit = scenario.Unit,
            Meters = [.. rig.Meters.Select(meter => MeterFor(meter, scenario))],
            Soak = new SoakOptions { PlannedHours = (scenario.EndSeconds - scenario.SwitchOnSeconds) / 3600 },
        };
        var plan = BenchPlan.From(options, Inventory.Of([]));
        prose.WriteLine($"{plan.Unit.Text} behind {plan.Bank.Text} at {plan.Mains}. {plan.Outlook}");
        foreach (var note in plan.WatchNotes)
        {
            prose.WriteLine(note);
        }

        prose.WriteLine(string.Create(CultureInfo.InvariantCulture, $"Time runs {speed:0.#} times faster than life; times below are the bench's own."));
        prose.WriteLine();

        var narrator = new RehearsalNarrator(prose, plan);
        var documents = await SoakHost.RunAsync(
            [plan], parsed.GetValue(_record) ?? new RecordingOptions().Folder, time, [narrator], logToConsole: false, started: time.Begin,
            parsed.GetValue(_noPage) ? null : new PageOrder(PageAddress.Of(new WebOptions(), "rehearse"), LampInventory.Empty, StaysOpen: false, MayFail: true, prose),
            attended: null,
            cancellation);
        cancellation.ThrowIfCancellationRequested();
        var document = documents.Count == 1 ? documents[0] : null;
        var missing = document is null ? ["a run: no current flowed"] : Missing(scenario, document, narrator, plan);
        if (document is not null)
        {
            prose.WriteLine($"The record lies in {document.Record}, run {document.Run}: see 'lampwarden runs'.");
            if (terminal.WantsJson)
            {
                terminal.WriteJson(document);
            }
        }

        foreach (var what in missing)
        {
            prose.WriteLine($"NOT AS THE SCENARIO ANNOUNCES: {what}.");
        }

        return missing.Count == 0 ? ExitCode.Done : ExitCode.No;
    }

    private static string Find(string name)
    {
        string[] places = [name, Path.Combine("config", "scenarios", name + ".json"), Path.Combine(AppContext.BaseDirectory, "scenarios", name + ".json")];
        return places.FirstOrDefault(File.Exists)
            ?? throw new BadInputException($"Scenario '{name}' is neither a file nor one of config/scenarios; looked for {string.Join(", ", places)}.");
    }

    /// <summary>The options by which a simulated meter is read.</summary>
    internal static MeterOptions MeterFor(RigMeter meter, Scenario scenario)
    {
        var colon = meter.Place.LastIndexOf(':');
        return new MeterOptions
        {
            Name = meter.Name,
            Quantity = meter.Quantity == MeasuredQuantity.LineCurrent ? Quantity.LineCurrent : Quantity.MainsVoltage,
            Transport = meter.TransportKind == "tcp"
                ? new TransportOptions { Kind = "tcp", Host = meter.Place[..colon], Port = meter.Place[(colon + 1)..] }
                : new TransportOptions { Kind = "serial", Port = meter.Place },
            Protocol = scenario.Meter.Dialect == "scpi"
                ? new ProtocolOptions()
                : new ProtocolOptions { Kind = "lines", Pattern = LineDialect.Pattern(scenario.Meter.Dialect) },
            ReadingsPerSecond = scenario.Meter.ReadingsPerSecond,
            WindowSeconds = scenario.Meter.WindowSeconds,
            Accuracy = new AccuracyOptions { CountSize = scenario.Meter.CountSize },
        };
    }

    private static List<string> Missing(Scenario scenario, SoakDocument document, RehearsalNarrator narrator, BenchPlan plan)
    {
        var missing = new List<string>();
        foreach (var signature in (scenario.Expect.Findings ?? []).Select(WatchingNames.ParseSignature))
        {
            if (!document.Findings.Any(finding => finding.Signature == signature))
            {
                missing.Add($"no finding {signature.Text()}");
            }
        }

        if (scenario.Expect.Findings is { Count: 0 } && document.Findings.FirstOrDefault(finding => finding.Severity != Severity.Notice) is { } cry)
        {
            missing.Add($"a finding {cry.Signature.Text()} that nobody scripted");
        }

        if (scenario.Expect.Verdict is { } verdict && document.Verdict.Text() != verdict)
        {
            missing.Add($"verdict {document.Verdict.Text()} instead of {verdict}");
        }

        var share = narrator.AmpsAtFirstAlert / plan.Prediction.Shorted.LineAmps;
        if (scenario.Expect.RaisedBelowShareOfShorted < 1 && share > scenario.Expect.RaisedBelowShareOfShorted)
        {
            missing.Add(string.Create(CultureInfo.InvariantCulture, $"the first alert came at {share:P0} of the shorted current"));
        }

        return missing;
    }
}
