using System.CommandLine;
using System.Globalization;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Commands;

/// <summary><c>runs</c>: the list of stored runs, latest first.</summary>
internal sealed class RunsCommand : CliCommand
{
    private readonly Option<string?> _record = CommonOptions.Record();
    private readonly Option<string> _config = CommonOptions.Config();
    private readonly Option<string?> _bench = new("--bench") { Description = "Only runs of this bench", HelpName = "NAME" };
    private readonly Option<string?> _unit = new("--unit") { Description = "Only units whose text or label contains this", HelpName = "TEXT" };
    private readonly Option<string?> _from = new("--from") { Description = "Only runs begun at this UTC date or later", HelpName = "DATE" };
    private readonly Option<string?> _to = new("--to") { Description = "Only runs begun before this UTC date", HelpName = "DATE" };
    private readonly Option<string?> _verdict = new("--verdict") { Description = "Only passed, failed or incomplete runs", HelpName = "V" };

    /// <summary>Declares the command.</summary>
    public RunsCommand()
        : base("runs", "List stored runs, latest first")
    {
        foreach (var option in new Option[] { _bench, _unit, _from, _to, _verdict, _record, _config })
        {
            Add(option);
        }
    }

    /// <inheritdoc/>
    protected override Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var filter = new RunFilter(
            parsed.GetValue(_bench), parsed.GetValue(_unit),
            RecordFolder.ParseUtc("--from", parsed.GetValue(_from)), RecordFolder.ParseUtc("--to", parsed.GetValue(_to)),
            ParseVerdict(parsed.GetValue(_verdict)));
        using var store = RecordFolder.Open(parsed, _record, _config);
        var runs = store.Runs(filter);
        if (terminal.WantsJson)
        {
            terminal.WriteJson(runs.Select(run => new
            {
                run.Run, run.Bench, run.Unit, run.UnitLabel, run.Bank, run.Mains, run.StartedUtc, run.EndedUtc, run.LengthSeconds,
                run.Readings, run.Lost, run.Verdict, run.Findings, run.ResumedFrom,
            }));
            return Task.FromResult(ExitCode.Done);
        }

        terminal.Prose.WriteLine($"{"run",-13} {"bench",-16} {"started (UTC)",-17} {"hours",7} {"readings",10} {"findings",8} {"verdict",-10} unit");
        foreach (var run in runs)
        {
            terminal.Prose.WriteLine(string.Create(
                CultureInfo.InvariantCulture,
                $"{run.Run,-13} {run.Bench,-16} {run.StartedUtc.UtcDateTime,-17:yyyy-MM-dd HH:mm} {run.LengthSeconds / 3600,7:0.00} {run.Readings,10} {run.Findings,8} {run.Verdict?.Text() ?? "going on",-10} {run.Unit}{(run.UnitLabel is { } label ? $" ({label})" : "")}"));
        }

        terminal.Prose.WriteLine($"{runs.Count} runs in {store.FilePath}");
        return Task.FromResult(ExitCode.Done);
    }

    private static Verdict? ParseVerdict(string? text) => text is null
        ? null
        : Enum.TryParse<Verdict>(text, ignoreCase: true, out var verdict) && verdict.Text() == text
            ? verdict
            : throw new BadInputException($"--verdict '{text}' is none; expected passed, failed or incomplete.");
}
