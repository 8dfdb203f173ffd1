using System.CommandLine;

namespace Lampwarden.Host.Commands;

/// <summary><c>note</c>: a sentence, a photograph or any file kept with a run, during it or afterwards.</summary>
internal sealed class NoteCommand : CliCommand
{
    private readonly Argument<string> _run = new("run") { Description = "Id of the run, as 'runs' lists it" };
    private readonly Argument<string?> _text = new("text") { Description = "What to note", Arity = ArgumentArity.ZeroOrOne };
    private readonly Option<string?> _by = new("--by") { Description = "Who notes it", HelpName = "NAME" };
    private readonly Option<string[]> _attach = new("--attach") { Description = "A photograph or file to keep with the run; may be given several times", HelpName = "FILE" };
    private readonly Option<string?> _record = CommonOptions.Record();
    private readonly Option<string> _config = CommonOptions.Config();

    /// <summary>Declares the command.</summary>
    public NoteCommand()
        : base("note", "Keep a note, a photograph or a file with a run; the report shows it")
    {
        Add(_run);
        Add(_text);
        foreach (var option in new Option[] { _by, _attach, _record, _config })
        {
            Add(option);
        }
    }

    /// <inheritdoc/>
    protected override async Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var (run, text, files) = (parsed.GetValue(_run)!, parsed.GetValue(_text), parsed.GetValue(_attach) ?? []);
        if (string.IsNullOrWhiteSpace(text) && files.Length == 0)
        {
            throw new BadInputException("Nothing to keep: give a text, or a file with --attach FILE.");
        }

        if (files.FirstOrDefault(file => !File.Exists(file)) is { } missing)
        {
            throw new BadInputException($"There is no file '{missing}'. Nothing was kept; check the name and try again.");
        }

        using var store = RecordFolder.Open(parsed, _record, _config);
        if (!string.IsNullOrWhiteSpace(text))
        {
            await store.AddNoteAsync(run, text, parsed.GetValue(_by), cancellationToken: cancellation);
        }

        foreach (var file in files)
        {
            await store.AttachAsync(run, Path.GetFileName(file), MediaType(file), await File.ReadAllBytesAsync(file, cancellation), cancellation);
        }

        if (terminal.WantsJson)
        {
            var record = store.Run(run);
            terminal.WriteJson(new { run, record.Notes, record.Attachments });
        }

        terminal.Prose.WriteLine($"Kept with run {run}.");
        return ExitCode.Done;
    }

    private static string MediaType(string file) => Path.GetExtension(file).ToLowerInvariant() switch
    {
        ".jpg" or ".jpeg" => "image/jpeg",
        ".png" => "image/png",
        ".pdf" => "application/pdf",
        ".txt" or ".md" => "text/plain",
        ".csv" => "text/csv",
        _ => "application/octet-stream",
    };
}
