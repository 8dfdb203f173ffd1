using System.CommandLine;
using System.CommandLine.Parsing;
using System.Globalization;

namespace Lampwarden.Host.Commands;

/// <summary>The command line as a whole: which commands there are, and what a mistyped line answers.</summary>
public static class CommandLine
{
    /// <summary>Said by <c>--help</c>; the long form stands in README.</summary>
    public const string Cautions =
        "A lamp limiter does not isolate: every part behind it stays live at mains potential, and the lamps get hot. " +
        "A fused, RCD/GFCI-protected bench and an isolation transformer are your business; this program is never the protective device. " +
        "Local codes and licensed practice come first.";

    /// <summary>How long a command may take to store everything after Ctrl-C or SIGTERM.</summary>
    private static readonly TimeSpan EndingTime = TimeSpan.FromSeconds(20);

    /// <summary>Runs one command line on the console.</summary>
    /// <param name="args">The words after the program's name.</param>
    /// <returns>An exit code of <see cref="ExitCode"/>.</returns>
    public static Task<int> RunAsync(string[] args) => RunAsync(args, Console.Out, Console.Error);

    /// <summary>Runs one command line with the given outputs.</summary>
    public static async Task<int> RunAsync(string[] args, TextWriter output, TextWriter error)
    {
        CultureInfo.DefaultThreadCurrentCulture = CultureInfo.CurrentCulture = CultureInfo.InvariantCulture;
        var parsed = Build().Parse(args);
        if (parsed.Errors.Count > 0)
        {
            foreach (var fault in parsed.Errors)
            {
                await error.WriteLineAsync(fault.Message);
            }

            await error.WriteLineAsync($"See 'lampwarden {(parsed.CommandResult.Command is RootCommand ? "" : parsed.CommandResult.Command.Name + " ")}--help'.");
            return ExitCode.BadInput;
        }

        return await parsed.InvokeAsync(new InvocationConfiguration
        {
            Output = output,
            Error = error,
            ProcessTerminationTimeout = EndingTime,
            EnableDefaultExceptionHandler = false,
        });
    }

    private static RootCommand Build() => new($"Lampwarden watches a repaired mains unit soak behind a series bank of lamps.\n{Cautions}")
    {
        // One line a command, in the order a technician meets them.
        new RehearseCommand(),
        new PredictCommand(),
        new ChooseCommand(),
        new CheckCommand(),
        new CalibrateCommand(),
        new WatchCommand(),
        new ReplayCommand(),
        AlertsTestCommand.Group(),
        new RunsCommand(),
        new ExportCommand(),
        new ImportCommand(),
        new CompareCommand(),
        new ReferenceCommand(),
        new NoteCommand(),
        new ReportCommand(),
        CutOffResetCommand.Group(),
        new TokenCommand(),
    };
}
