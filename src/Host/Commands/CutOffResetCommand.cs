using System.CommandLine;
using Lampwarden.Host.Alerting.CutOff;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Commands;

/// <summary><c>cut-off reset BENCH</c>: a person who has looked at the bench lets its contactor be closed again.</summary>
internal sealed class CutOffResetCommand : CliCommand
{
    /// <summary>How long a running service gets to carry it out.</summary>
    private static readonly TimeSpan Patience = TimeSpan.FromSeconds(10);

    private readonly Option<string> _config = CommonOptions.Config();
    private readonly Option<string?> _record = CommonOptions.Record();
    private readonly Argument<string> _bench = new("BENCH") { Description = "Name of the bench" };
    private readonly Option<string> _by = new("--by") { Description = "Who has looked", HelpName = "NAME", Required = true };

    public CutOffResetCommand()
        : base("reset", "After looking at the bench: let its contactor be closed again. The cut-off is a convenience, no protective device")
    {
        Add(_bench);
        Add(_by);
        Add(_config);
        Add(_record);
    }

    /// <summary>The parent command.</summary>
    public static Command Group() => new("cut-off", "The output that opens a contactor of yours: a convenience, no protective device") { new CutOffResetCommand() };

    protected override async Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var options = ConfigurationFile.Load(parsed.GetValue(_config)!);
        var bench = parsed.GetValue(_bench)!;
        var outputs = options.Alerts.CutOff?.Outputs ?? [];
        if (!outputs.Any(output => output.Bench == bench))
        {
            throw new BadInputException($"'{bench}' has no cut-off; {(outputs.Count == 0 ? "no bench has one" : "expected one of " + string.Join(", ", outputs.Select(output => output.Bench)))}.");
        }

        var file = new CutOffFile(parsed.GetValue(_record) ?? options.Recording.Folder, bench);
        file.Wish(parsed.GetValue(_by)!);
        for (var waited = TimeSpan.Zero; waited < Patience && File.Exists(file.ResetPath); waited += TimeSpan.FromMilliseconds(200))
        {
            await Task.Delay(TimeSpan.FromMilliseconds(200), cancellation);
        }

        if (File.Exists(file.ResetPath))
        {
            File.Delete(file.ResetPath);
            terminal.Error.WriteLine($"{bench}: not reset: no running service took the wish within {Patience.TotalSeconds:F0} s. Start the service, then reset.");
            return ExitCode.No;
        }

        var state = file.Load();
        terminal.Prose.WriteLine($"{bench}: {state?.Position.ToString().ToLowerInvariant()}, {state?.Why}.");
        if (terminal.WantsJson)
        {
            terminal.WriteJson(new { bench, state });
        }

        return state?.Position == CutOffPosition.Armed ? ExitCode.Done : ExitCode.No;
    }
}
