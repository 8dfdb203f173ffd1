using System.Text.Json;

namespace Lampwarden.Host.Commands;

/// <summary>Where a command speaks. With <c>--json</c> standard output holds one document and nothing else; prose goes to standard error.</summary>
internal sealed class Terminal(TextWriter output, TextWriter error, bool json)
{
    /// <summary>Whether one JSON document is wanted.</summary>
    public bool WantsJson => json;

    /// <summary>Prose for a reader: standard output, or standard error when the output is a JSON document.</summary>
    public TextWriter Prose { get; } = json ? error : output;

    /// <summary>Warnings and errors.</summary>
    public TextWriter Error => error;

    /// <summary>Standard output itself, for a command whose output is data (an exported series).</summary>
    public TextWriter Output => output;

    /// <summary>Writes the one document.</summary>
    public void WriteJson<T>(T document) => output.WriteLine(JsonSerializer.Serialize(document, Json.Pretty));
}
