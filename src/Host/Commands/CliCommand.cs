using System.CommandLine;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Commands;

/// <summary>One command of the command line: declares its options and does its work; failures become messages and exit codes here.</summary>
internal abstract class CliCommand : Command
{
    private readonly Option<bool> _json = new("--json") { Description = "One JSON document on standard output, prose on standard error" };

    /// <summary>Declares the command.</summary>
    protected CliCommand(string name, string description)
        : base(name, description)
    {
        Add(_json);
        SetAction(InvokeAsync);
    }

    /// <summary>Does the work.</summary>
    /// <returns>One of <see cref="ExitCode"/>.</returns>
    protected abstract Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation);

    private async Task<int> InvokeAsync(ParseResult parsed, CancellationToken cancellation)
    {
        var configuration = parsed.InvocationConfiguration;
        var terminal = new Terminal(configuration.Output, configuration.Error, parsed.GetValue(_json));
        try
        {
            return await RunAsync(parsed, terminal, cancellation);
        }
        catch (OperationCanceledException) when (cancellation.IsCancellationRequested)
        {
            return ExitCode.Interrupted;
        }
        catch (Exception error) when (error is FormatException or ConfigurationException or BadInputException)
        {
            terminal.Error.WriteLine(error.Message);
            return ExitCode.BadInput;
        }
        catch (Exception error) when (error is IOException or UnauthorizedAccessException or Microsoft.Data.Sqlite.SqliteException)
        {
            terminal.Error.WriteLine($"{Name}: {error.Message}");
            return ExitCode.Trouble;
        }
    }
}

/// <summary>The user asked for something that cannot be: the message says what, where, expected and what to do.</summary>
public sealed class BadInputException(string message) : Exception(message);
