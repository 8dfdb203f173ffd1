using System.CommandLine;
using Lampwarden.Host.Recording.Exchange;

namespace Lampwarden.Host.Commands;

/// <summary><c>export</c>: a run's readings as CSV or Parquet, or the whole run as an archive.</summary>
internal sealed class ExportCommand : CliCommand
{
    private readonly Argument<string> _run = new("run") { Description = "Id of the run, as 'runs' lists it" };
    private readonly Option<string> _format = new("--format") { Description = "csv, parquet or archive (the whole run in one zip)", HelpName = "F", DefaultValueFactory = _ => "csv" };
    private readonly Option<string?> _output = new("--output", "-o") { Description = "File to write; csv goes to standard output without it", HelpName = "FILE" };
    private readonly Option<string?> _record = CommonOptions.Record();
    private readonly Option<string> _config = CommonOptions.Config();

    /// <summary>Declares the command.</summary>
    public ExportCommand()
        : base("export", "Write a run as CSV (as 'replay' reads it), Parquet, or an archive of everything")
    {
        _format.AcceptOnlyFromAmong("csv", "parquet", "archive");
        Add(_run);
        foreach (var option in new Option[] { _format, _output, _record, _config })
        {
            Add(option);
        }
    }

    /// <inheritdoc/>
    protected override async Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var (run, format, output) = (parsed.GetValue(_run)!, parsed.GetValue(_format)!, parsed.GetValue(_output));
        using var store = RecordFolder.Open(parsed, _record, _config);
        if (output is null && (format != "csv" || terminal.WantsJson))
        {
            throw new BadInputException($"--format {format} needs a file: give one with --output FILE.");
        }

        if (output is null)
        {
            CsvSeries.Write(terminal.Output, store.Readings(run), store.HasVolts(run));
            return ExitCode.Done;
        }

        // Under another name first: a failed export leaves no half a file that looks whole.
        var unfinished = output + ".part";
        await using (var file = File.Create(unfinished))
        {
            switch (format)
            {
                case "csv":
                    await using (var writer = new StreamWriter(file))
                    {
                        CsvSeries.Write(writer, store.Readings(run), store.HasVolts(run));
                    }

                    break;
                case "parquet":
                    await ParquetSeries.WriteAsync(file, RunArchive.ToJson(store.Run(run)), store.Readings(run), cancellation);
                    break;
                default:
                    RunArchive.Write(file, store, run);
                    break;
            }
        }

        File.Move(unfinished, output, overwrite: true);
        if (terminal.WantsJson)
        {
            terminal.WriteJson(new { run, format, file = Path.GetFullPath(output) });
        }

        terminal.Prose.WriteLine($"Run {run} is in {output}.");
        return ExitCode.Done;
    }
}
