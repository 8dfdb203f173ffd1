using System.Text.Json;
using Lampwarden.Host.Commands;

namespace Lampwarden.Host.Tests.Commands;

/// <summary>Runs a command line in this process and keeps what it said.</summary>
internal sealed record Cli(int Code, string Output, string Error)
{
    public static async Task<Cli> RunAsync(params string[] args)
    {
        using var output = new StringWriter();
        using var error = new StringWriter();
        // Soaks tell their story from their own loop while logs come from others.
        var code = await CommandLine.RunAsync(args, TextWriter.Synchronized(output), TextWriter.Synchronized(error));
        return new Cli(code, output.ToString(), error.ToString());
    }

    /// <summary>The one document on standard output.</summary>
    public JsonElement Json => JsonDocument.Parse(Output).RootElement;
}
