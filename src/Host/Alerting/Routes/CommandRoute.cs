using System.ComponentModel;
using System.Diagnostics;
using System.Text.Json;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Alerting.Routes;

/// <summary>Runs a program for each change, without a shell: JSON on its standard input, the main facts in its environment, exit 0 for told.</summary>
public sealed class CommandRoute(string name, RunOptions options, string instance) : IAlertRoute
{
    private const int ExcerptCharacters = 400;

    /// <inheritdoc/>
    public string Name => name;

    /// <inheritdoc/>
    /// <exception cref="RouteException">It cannot be started, or ended with another code. Cancelling kills it with all its children.</exception>
    public async Task TellAsync(AlertChange change, CancellationToken cancellation)
    {
        var message = AlertMessage.Of(change, instance);
        using var process = new Process { StartInfo = Describe(message) };
        try
        {
            process.Start();
        }
        catch (Exception error) when (error is Win32Exception or IOException or InvalidOperationException)
        {
            throw new RouteException($"{options.Program} cannot be started: {error.Message}", error);
        }

        var errors = ReadExcerptAsync(process.StandardError);
        var output = ReadExcerptAsync(process.StandardOutput);
        try
        {
            await WriteAsync(process, message, cancellation);
            await process.WaitForExitAsync(cancellation);
        }
        catch (OperationCanceledException)
        {
            process.Kill(entireProcessTree: true);
            throw;
        }

        if (process.ExitCode != 0)
        {
            // A child of the program may hold the pipe open after it ended: what came within a second must do.
            await Task.WhenAny(Task.WhenAll(errors, output), Task.Delay(TimeSpan.FromSeconds(1), CancellationToken.None));
            var said = errors.IsCompletedSuccessfully ? errors.Result.Trim() : "";
            throw new RouteException($"{options.Program} ended with {process.ExitCode}{(said.Length > 0 ? ": " + said : "")}");
        }
    }

    private ProcessStartInfo Describe(AlertMessage message)
    {
        var start = new ProcessStartInfo(options.Program, options.Arguments)
        {
            RedirectStandardInput = true,
            RedirectStandardOutput = true,
            RedirectStandardError = true,
            UseShellExecute = false,
        };
        // The service's own settings and secrets are not the program's business.
        foreach (var key in start.Environment.Keys.Where(key => key.StartsWith("LAMPWARDEN", StringComparison.OrdinalIgnoreCase)).ToList())
        {
            start.Environment.Remove(key);
        }

        start.Environment["LAMPWARDEN_BENCH"] = message.Bench;
        start.Environment["LAMPWARDEN_WHAT"] = message.What;
        start.Environment["LAMPWARDEN_CAUSE"] = message.Cause;
        start.Environment["LAMPWARDEN_SEVERITY"] = message.Severity.Text();
        start.Environment["LAMPWARDEN_SUBJECT"] = message.Subject();
        return start;
    }

    private static async Task WriteAsync(Process process, AlertMessage message, CancellationToken cancellation)
    {
        try
        {
            await process.StandardInput.WriteAsync(JsonSerializer.Serialize(message, Json.Compact).AsMemory(), cancellation);
            process.StandardInput.Close();
        }
        catch (IOException)
        {
            // It does not want its input; its exit code says whether it told anybody.
        }
    }

    /// <summary>Reads to the end, so that the program never blocks on a full pipe, and keeps the beginning.</summary>
    private static async Task<string> ReadExcerptAsync(StreamReader reader)
    {
        var kept = new char[ExcerptCharacters];
        var spill = new char[4096];
        var count = 0;
        try
        {
            for (int read; (read = count < kept.Length ? await reader.ReadAsync(kept.AsMemory(count)) : await reader.ReadAsync(spill)) > 0;)
            {
                count = Math.Min(kept.Length, count + read);
            }
        }
        catch (Exception error) when (error is IOException or ObjectDisposedException or InvalidOperationException)
        {
            // Killed, or disposed with the process.
        }

        return new string(kept, 0, count);
    }
}
