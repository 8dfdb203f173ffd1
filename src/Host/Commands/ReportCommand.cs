using System.CommandLine;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Reporting;
using Lampwarden.Host.Reporting.Pdf;

namespace Lampwarden.Host.Commands;

/// <summary><c>report</c>: the record that goes back with the unit, as PDF and HTML; or the check of one against the stored readings.</summary>
internal sealed class ReportCommand : CliCommand
{
    private readonly Argument<string> _run = new("run") { Description = "Id of the run, as 'runs' lists it" };
    private readonly Option<string> _output = new("--output", "-o") { Description = "Folder for the two files", HelpName = "FOLDER", DefaultValueFactory = _ => "." };
    private readonly Option<string> _paper = new("--paper") { Description = "a4 or letter", HelpName = "P", DefaultValueFactory = _ => "a4" };
    private readonly Option<string?> _sign = new("--sign") { Description = "Your name, typed under the record and kept with the run", HelpName = "NAME" };
    private readonly Option<string?> _verify = new("--verify") { Description = "Compare a report's file, or its 64 digits, with the stored readings", HelpName = "FILE" };
    private readonly Option<string?> _record = CommonOptions.Record();
    private readonly Option<string> _config = CommonOptions.Config();

    /// <summary>Declares the command.</summary>
    public ReportCommand()
        : base("report", "Write the record that goes back with the unit (PDF and HTML), or verify one")
    {
        _paper.AcceptOnlyFromAmong("a4", "letter");
        Add(_run);
        foreach (var option in new Option[] { _output, _paper, _sign, _verify, _record, _config })
        {
            Add(option);
        }
    }

    /// <inheritdoc/>
    protected override async Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var run = parsed.GetValue(_run)!;
        using var store = RecordFolder.Open(parsed, _record, _config);
        if (parsed.GetValue(_verify) is { } given)
        {
            return Verify(store, run, given, terminal);
        }

        if (parsed.GetValue(_sign) is { } name)
        {
            await store.SignAsync(run, name, cancellation);
        }

        var paper = parsed.GetValue(_paper) == Paper.Letter.Name ? Paper.Letter : Paper.A4;
        var content = ReportBuilder.Build(store, run, TimeProvider.System.GetUtcNow());
        Directory.CreateDirectory(parsed.GetValue(_output)!);
        var stem = Path.Combine(parsed.GetValue(_output)!, $"soak-{run}");
        await using (var file = File.Create(stem + ".pdf"))
        {
            PdfReport.Write(file, content, paper);
        }

        await File.WriteAllTextAsync(stem + ".html", HtmlReport.Write(content, paper), cancellation);
        if (terminal.WantsJson)
        {
            terminal.WriteJson(new { run, pdf = Path.GetFullPath(stem + ".pdf"), html = Path.GetFullPath(stem + ".html"), content.ReadingsSha256, verdict = content.Verdict });
        }

        terminal.Prose.WriteLine($"{stem}.pdf and {stem}.html: {content.Verdict}");
        return ExitCode.Done;
    }

    private static int Verify(SoakStore store, string run, string given, Terminal terminal)
    {
        if (given.Length != 64 && !File.Exists(given))
        {
            throw new BadInputException($"--verify '{given}' is neither a file nor 64 hexadecimal digits; give a report that 'lampwarden report' wrote.");
        }

        var told = ReportVerification.Find(given)
            ?? throw new BadInputException($"{given} carries no check sum; give a PDF or HTML that 'lampwarden report' wrote.");
        var stored = ReadingsDigest.Of(store, run);
        var same = told == stored;
        if (terminal.WantsJson)
        {
            terminal.WriteJson(new { run, verified = same, reported = told, stored });
        }

        terminal.Prose.WriteLine(same
            ? $"The stored readings of run {run} are those the report was made from ({told})."
            : $"The stored readings of run {run} are NOT those the report was made from: it says {told}, they give {stored}.");
        return same ? ExitCode.Done : ExitCode.No;
    }
}
