using System.CommandLine;
using System.Globalization;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Reporting;

namespace Lampwarden.Host.Commands;

/// <summary><c>compare</c>: two runs of like units side by side.</summary>
internal sealed class CompareCommand : CliCommand
{
    private readonly Argument<string> _first = new("first") { Description = "Id of the run to compare with" };
    private readonly Argument<string> _second = new("second") { Description = "Id of the run to compare" };
    private readonly Option<string?> _record = CommonOptions.Record();
    private readonly Option<string> _config = CommonOptions.Config();

    /// <summary>Declares the command.</summary>
    public CompareCommand()
        : base("compare", "Two runs of like units side by side, with the differences explained")
    {
        Add(_first);
        Add(_second);
        Add(_record);
        Add(_config);
    }

    /// <inheritdoc/>
    protected override Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        using var store = RecordFolder.Open(parsed, _record, _config);
        var comparison = RunComparison.Of(store, parsed.GetValue(_first)!, parsed.GetValue(_second)!);
        if (terminal.WantsJson)
        {
            terminal.WriteJson(new { first = comparison.First, second = comparison.Second, comparison.Figures, comparison.Remarks });
            return Task.FromResult(ExitCode.Done);
        }

        terminal.Prose.WriteLine($"{"",-20} {comparison.First.Run,14} {comparison.Second.Run,14} {"difference",11}");
        terminal.Prose.WriteLine($"{"verdict",-20} {comparison.First.Verdict?.Text(),14} {comparison.Second.Verdict?.Text(),14}");
        foreach (var figure in comparison.Figures)
        {
            terminal.Prose.WriteLine(string.Create(
                CultureInfo.InvariantCulture,
                $"{figure.Name + (figure.Unit.Length > 0 ? $" ({figure.Unit})" : ""),-20} {Number(figure.First),14} {Number(figure.Second),14} {(double.IsFinite(figure.DifferencePercent) ? figure.DifferencePercent.ToString("+0.0;-0.0;0.0", CultureInfo.InvariantCulture) + " %" : ""),11}"));
        }

        foreach (var remark in comparison.Remarks)
        {
            terminal.Prose.WriteLine(remark);
        }

        return Task.FromResult(ExitCode.Done);
    }

    private static string Number(double value) => double.IsNaN(value) ? "-" : value.ToString("0.#####", CultureInfo.InvariantCulture);
}
