using System.CommandLine;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Recording.Exchange;
using Lampwarden.Host.Soaking;

namespace Lampwarden.Host.Commands;

/// <summary><c>replay FILE.csv</c> or <c>replay RUN</c>: a recorded series or a stored run through the same watch, offline.</summary>
internal sealed class ReplayCommand : CliCommand
{
    private readonly Argument<string> _file = new("FILE") { Description = "CSV with the header seconds,amps or seconds,amps,volts; or the id of a stored run" };
    private readonly Option<string?> _record = CommonOptions.Record();
    private readonly Option<string?> _config = new("--config") { Description = "Configuration with the bench the series came from", HelpName = "F" };
    private readonly Option<string?> _bench = new("--bench") { Description = "Which bench of the configuration", HelpName = "NAME" };

    public ReplayCommand()
        : base("replay", "Run a recorded series through the watch")
    {
        Add(_file);
        Add(_config);
        Add(_bench);
        Add(_record);
    }

    protected override Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var (series, own, announcements) = Read(parsed);
        var settings = Settings(parsed.GetValue(_config), parsed.GetValue(_bench), series, own);
        var ledger = new SoakLedger(AnnouncementReplay.SettingsOf(announcements, settings));
        var told = new AnnouncementReplay(announcements);
        foreach (var observation in series)
        {
            cancellation.ThrowIfCancellationRequested();
            foreach (var change in told.Before(observation.Seconds, ledger).Concat(ledger.Take(observation, "blank")))
            {
                terminal.Prose.WriteLine(Narration.Line(observation.Seconds, change));
            }
        }

        var (document, judgement) = ledger.Close(ledger.LastSeconds);
        terminal.Prose.WriteLine($"{document.Readings} readings, {document.Gaps.Count} gap(s), {document.Findings.Count} finding(s). Verdict: {document.Verdict.Text()}.");
        foreach (var reason in judgement.Reasons)
        {
            terminal.Prose.WriteLine("  " + reason);
        }

        if (terminal.WantsJson)
        {
            terminal.WriteJson(document);
        }

        return Task.FromResult(document.Verdict == Verdict.Failed ? ExitCode.No : ExitCode.Done);
    }

    // A stored run brings its own bench along; a configuration named beside it replaces that.
    private (IReadOnlyList<Observation> Series, BenchOptions? Own, IReadOnlyList<StoredAnnouncement> Announcements) Read(ParseResult parsed)
    {
        var name = parsed.GetValue(_file)!;
        var folder = parsed.GetValue(_record);
        if (File.Exists(name) || (folder is null && !StoredSeries.IsRunId(name)))
        {
            return (SeriesFile.Read(name), null, []);
        }

        using var store = SoakStore.Open(RecordFolder.Of(folder, parsed.GetValue(_config) ?? ConfigurationFile.DefaultPath), TimeProvider.System, StoreMode.Review);
        var record = store.Run(name);
        return (StoredSeries.Read(store, name), StoredSeries.BenchOf(record), record.Announcements);
    }

    private static WatchSettings Settings(string? config, string? bench, IReadOnlyList<Observation> series, BenchOptions? own)
    {
        var mainsMeasured = series.Any(observation => !double.IsNaN(observation.MainsVolts));
        if (config is null)
        {
            if (bench is not null)
            {
                throw new BadInputException("--bench names a bench of a configuration; give --config F too.");
            }

            if (own is not null)
            {
                return BenchPlan.From(own, Inventory.Of(own.Inventory)).WatchSettings;
            }

            // Without a bench nothing is predicted: the watch goes by the series alone.
            return new WatchSettings { ReadingsPerSecond = SeriesFile.RatePerSecond(series), MainsMeasured = mainsMeasured };
        }

        var options = ConfigurationFile.Load(config);
        var chosen = bench is null
            ? options.Benches[0]
            : options.Benches.FirstOrDefault(one => one.Name == bench)
              ?? throw new BadInputException($"{config} has no bench '{bench}'; it has {string.Join(", ", options.Benches.Select(one => one.Name))}.");
        return BenchPlan.From(chosen, Inventory.Of(options.Lamps)).WatchSettings with
        {
            ReadingsPerSecond = SeriesFile.RatePerSecond(series),
            MainsMeasured = mainsMeasured,
        };
    }
}
