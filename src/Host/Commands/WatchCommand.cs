using System.CommandLine;
using Lampwarden.Acquisition.Transport;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Unattended;
using Lampwarden.Host.Web;
using Lampwarden.Host.Web.Access;

namespace Lampwarden.Host.Commands;

/// <summary><c>watch</c>: the service. Every bench of the configuration, recording and alerts, until the soaks are done.</summary>
internal sealed class WatchCommand : CliCommand
{
    private readonly Option<string> _config = CommonOptions.Config();
    private readonly Option<string?> _record = CommonOptions.Record();
    private readonly Option<bool> _noPage = CommonOptions.NoPage();
    private readonly Option<string?> _duration = new("--duration") { Description = "Stop by itself after this time, such as 90s or 12h", HelpName = "T" };

    private readonly Option<bool> _resume = new("--resume") { Description = "Carry on the runs that the service left off lately, by a stop or a crash" };

    public WatchCommand()
        : base("watch", "Watch the benches of the configuration: record, alert, judge")
    {
        Add(_config);
        Add(_record);
        Add(_noPage);
        Add(_duration);
        Add(_resume);
    }

    protected override async Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var duration = parsed.GetValue(_duration) is { } text ? CommonOptions.ParseDuration(text) : Timeout.InfiniteTimeSpan;
        var options = ConfigurationFile.Load(parsed.GetValue(_config)!);
        var address = parsed.GetValue(_noPage) ? null : PageAddress.Of(options.Web, parsed.GetValue(_config)!);
        var inventory = Inventory.Of(options.Lamps);
        var plans = options.Benches.Select(bench => BenchPlan.From(bench, inventory)).ToList();
        // A port mistyped is told at once and leaves no empty record; one that goes away later is waited for.
        foreach (var meter in options.Benches.SelectMany(bench => bench.Meters).Where(meter => meter.Transport.Kind == "serial"))
        {
            SerialPorts.EnsurePresent(meter.Transport.Port);
        }

        foreach (var plan in plans)
        {
            terminal.Prose.WriteLine($"{plan.Name}: {plan.Unit.Text} behind {plan.Bank.Text} at {plan.Mains}. {plan.Outlook}");
            foreach (var note in plan.WatchNotes)
            {
                terminal.Prose.WriteLine("  " + note);
            }
        }

        terminal.Prose.WriteLine(CommandLine.Cautions);
        using var ending = CancellationTokenSource.CreateLinkedTokenSource(cancellation);
        ending.CancelAfter(duration);
        var documents = await SoakHost.RunAsync(
            plans, parsed.GetValue(_record) ?? options.Recording.Folder, TimeProvider.System, [], logToConsole: true, started: null,
            address is null ? null : new PageOrder(address, inventory, StaysOpen: true, MayFail: false, terminal.Prose),
            new AttendanceOrder(
                options, parsed.GetValue(_config)!, parsed.GetValue(_resume) ? TimeSpan.FromMinutes(options.Unattended.ResumeWithinMinutes) : null),
            ending.Token,
            options.Recording.Influx);
        Finish(terminal, documents);
        return cancellation.IsCancellationRequested ? ExitCode.Interrupted : Answer(documents, plans.Count);
    }

    /// <summary>Says what came of the runs: one document, or a list of them where several benches ran.</summary>
    internal static void Finish(Terminal terminal, IReadOnlyList<SoakDocument> documents)
    {
        foreach (var document in documents)
        {
            terminal.Prose.WriteLine($"Run {document.Run}: {document.Verdict.Text()}, {document.Readings} readings, in {document.Record}.");
        }

        if (documents.Count == 0)
        {
            terminal.Prose.WriteLine("No run began: no current flowed before the end.");
        }

        if (terminal.WantsJson)
        {
            if (documents.Count == 1)
            {
                terminal.WriteJson(documents[0]);
            }
            else
            {
                terminal.WriteJson(new { runs = documents });
            }
        }
    }

    private static int Answer(IReadOnlyList<SoakDocument> documents, int benches) =>
        documents.Count >= benches && documents.All(document => document.Verdict != Verdict.Failed) ? ExitCode.Done : ExitCode.No;
}
