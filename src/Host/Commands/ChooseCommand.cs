using System.CommandLine;
using System.Globalization;
using Lampwarden.Analysis.Choosing;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Units;
using Lampwarden.Host.Soaking;

namespace Lampwarden.Host.Commands;

/// <summary><c>choose</c>: which of the lamps at hand to use, and in which steps to bring the unit up.</summary>
internal sealed class ChooseCommand : CliCommand
{
    private const int MostLines = 12;

    private readonly Option<string> _mains = CommonOptions.Mains();
    private readonly Option<string> _unit = new("--unit") { Description = "Unit, such as \"rectifier 45 W 470 uF\"", HelpName = "U", Required = true };

    private readonly Option<string?> _lamps = new("--lamps")
    {
        Description = $"Lamps at hand, separated by commas; names of the inventory too. Without it the inventory, or else {BankChooser.UsualShelf}",
        HelpName = "L, L, ...",
    };

    private readonly Option<string?> _config = new("--config") { Description = "Configuration with the lamp inventory", HelpName = "F" };

    public ChooseCommand()
        : base("choose", "Rank every useful combination of the lamps at hand, and plan the bring-up")
    {
        Add(_mains);
        Add(_unit);
        Add(_lamps);
        Add(_config);
    }

    protected override Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var inventory = parsed.GetValue(_config) is { } file ? Inventory.Of(Configuration.ConfigurationFile.Load(file).Lamps) : LampInventory.Empty;
        var mains = Mains.Parse(parsed.GetValue(_mains)!);
        var unit = Unit.Parse(parsed.GetValue(_unit)!, mains);
        var shelf = Shelf(parsed.GetValue(_lamps), mains, inventory);
        BankChoices answer;
        try
        {
            answer = BankChooser.Choose(mains, unit, shelf);
        }
        catch (ArgumentException fault)
        {
            throw new BadInputException("--lamps: " + fault.Message);
        }

        if (terminal.WantsJson)
        {
            terminal.WriteJson(answer);
        }
        else
        {
            Tell(terminal.Prose, mains, unit, answer);
        }

        return Task.FromResult(answer.Choices.Any(choice => choice.Exists) ? ExitCode.Done : ExitCode.No);
    }

    /// <summary>The lamps at hand: those named, else the inventory, else the usual ones.</summary>
    internal static Lamp[] Shelf(string? text, Mains mains, LampInventory inventory)
    {
        if (text is null && inventory.Names.Count > 0)
        {
            text = string.Join(", ", inventory.Names);
        }

        var shelf = new List<Lamp>();
        foreach (var item in (text ?? BankChooser.UsualShelf).Split(',', StringSplitOptions.TrimEntries))
        {
            var bank = Bank.Parse(item, mains, inventory);
            shelf.Add(bank.Lamps.Count == 1
                ? bank.Lamps[0]
                : throw new BadInputException($"--lamps '{item}' is more than one lamp; expected single lamps separated by commas, such as \"25 W, 75 W, 75 W\"."));
        }

        return [.. shelf];
    }

    private static void Tell(TextWriter prose, Mains mains, Unit unit, BankChoices answer)
    {
        prose.WriteLine($"{answer.Considered} banks tried for {unit.Text} at {mains}; the best:");
        foreach (var choice in answer.Choices.Take(MostLines))
        {
            var numbers = choice.Exists
                ? string.Create(CultureInfo.InvariantCulture, $"{Narration.Amps(choice.LineAmps)}, unit {choice.UnitVolts:0} V, shorted {Narration.Amps(choice.ShortedAmps)}")
                : $"shorted {Narration.Amps(choice.ShortedAmps)}";
            prose.WriteLine($"  {choice.Bank,-34} {choice.Verdict,-12} {numbers}");
        }

        prose.WriteLine(answer.Choices.Count > 0 ? "  First: " + answer.Choices[0].Reason : "  none");
        if (answer.BringUp.Count > 0)
        {
            prose.WriteLine("Bring the unit up in these steps; wait until the meter has settled at each:");
            foreach (var step in answer.BringUp)
            {
                prose.WriteLine($"  {step.Bank,-34} expect {Narration.Amps(step.ExpectLowAmps)} to {Narration.Amps(step.ExpectHighAmps)}, stop above {Narration.Amps(step.StopAboveAmps)}. {step.Why}");
            }
        }

        foreach (var note in answer.Notes)
        {
            prose.WriteLine(note);
        }

        prose.WriteLine(CommandLine.Cautions);
    }
}
