using System.CommandLine;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Recording.Exchange;

namespace Lampwarden.Host.Commands;

/// <summary><c>import</c>: a run that another machine exported, or a bare series of readings.</summary>
internal sealed class ImportCommand : CliCommand
{
    private readonly Argument<string> _file = new("file") { Description = "An archive, a Parquet file or a CSV that 'export' wrote" };
    private readonly Option<string?> _record = CommonOptions.Record();
    private readonly Option<string> _config = CommonOptions.Config();
    private readonly Option<string> _bench = Said("--bench", "imported");
    private readonly Option<string> _unit = Said("--unit", "unknown");
    private readonly Option<string> _bank = Said("--bank", "unknown");
    private readonly Option<string> _mains = Said("--mains", "unknown");
    private readonly Option<string?> _started = new("--started") { Description = "When a bare series began, UTC; now without it", HelpName = "TIME" };

    /// <summary>Declares the command.</summary>
    public ImportCommand()
        : base("import", "Take an exported run into the record")
    {
        Add(_file);
        foreach (var option in new Option[] { _bench, _unit, _bank, _mains, _started, _record, _config })
        {
            Add(option);
        }
    }

    /// <inheritdoc/>
    protected override async Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var file = parsed.GetValue(_file)!;
        if (!File.Exists(file))
        {
            throw new BadInputException($"There is no file '{file}'. Name an archive, a Parquet file or a CSV that 'lampwarden export' wrote.");
        }

        var carried = await ReadAsync(file, cancellation);
        var folder = RecordFolder.Of(parsed.GetValue(_record), parsed.GetValue(_config)!);
        if (!File.Exists(Path.Combine(folder, SoakStore.FileName)))
        {
            // The first thing on a new machine may well be an import: make the store as recording would.
            SoakStore.Open(folder, TimeProvider.System).Dispose();
        }

        using var store = SoakStore.Open(folder, TimeProvider.System, StoreMode.Review);
        var run = await RunImport.ImportAsync(
            store, carried,
            new RunStart
            {
                Bench = parsed.GetValue(_bench)!, Unit = parsed.GetValue(_unit)!, Bank = parsed.GetValue(_bank)!, Mains = parsed.GetValue(_mains)!,
                StartedUtc = RecordFolder.ParseUtc("--started", parsed.GetValue(_started)),
            },
            cancellation);
        if (terminal.WantsJson)
        {
            terminal.WriteJson(new { run, origin = carried.Record?.Info.Run, record = store.FilePath });
        }

        terminal.Prose.WriteLine($"{file} is now run {run} in {store.FilePath}.");
        return ExitCode.Done;
    }

    private static async Task<CarriedRun> ReadAsync(string file, CancellationToken cancellation)
    {
        await using var stream = File.OpenRead(file);
        var head = new byte[4];
        var length = await stream.ReadAsync(head, cancellation);
        stream.Position = 0;
        var nothing = new Dictionary<string, byte[]>();
        switch (System.Text.Encoding.ASCII.GetString(head, 0, length))
        {
            case "PK\u0003\u0004":
                return RunArchive.Read(stream, file);
            case "PAR1":
                var (json, readings) = await ParquetSeries.ReadAsync(stream, file, cancellation);
                return new CarriedRun(json is null ? null : RunArchive.FromJson(json, file), readings, nothing);
            default:
                using (var text = new StreamReader(stream))
                {
                    return new CarriedRun(null, CsvSeries.Read(text, file).ToList(), nothing);
                }
        }
    }

    private static Option<string> Said(string name, string otherwise) =>
        new(name) { Description = "Said of a bare series", HelpName = "TEXT", DefaultValueFactory = _ => otherwise };
}
