using System.CommandLine;

namespace Lampwarden.Host.Commands;

/// <summary><c>reference</c>: names a passed run the reference of a unit model.</summary>
internal sealed class ReferenceCommand : CliCommand
{
    private readonly Argument<string> _run = new("run") { Description = "Id of a passed run" };
    private readonly Option<string> _model = new("--model") { Description = "The unit model, as benches name it in unitModel", HelpName = "NAME", Required = true };
    private readonly Option<string?> _record = CommonOptions.Record();
    private readonly Option<string> _config = CommonOptions.Config();

    /// <summary>Declares the command.</summary>
    public ReferenceCommand()
        : base("reference", "Make a passed run the reference of its unit model: the next unit is held to it")
    {
        Add(_run);
        Add(_model);
        Add(_record);
        Add(_config);
    }

    /// <inheritdoc/>
    protected override async Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var (run, model) = (parsed.GetValue(_run)!, parsed.GetValue(_model)!);
        using var store = RecordFolder.Open(parsed, _record, _config);
        await store.SetReferenceAsync(model, run, cancellation);
        if (terminal.WantsJson)
        {
            terminal.WriteJson(new { run, model });
        }

        terminal.Prose.WriteLine($"Run {run} is now the reference of unit model '{model}'.");
        return ExitCode.Done;
    }
}
