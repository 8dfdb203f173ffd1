using Lampwarden.Analysis.Choosing;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Tests.Choosing;

public sealed class BankChooserTests
{
    private static readonly Mains Mains120 = new(120, 60);

    [Fact]
    public void Combinations_EqualLamps_NeverComeTwice()
    {
        var banks = BankCombinations.Of(Shelf("25 W", "75 W", "75 W", "150 W")).Select(bank => bank.Text).ToArray();
        Assert.Equal(banks.Length, banks.Distinct().Count());
        Assert.Contains("75 W || 75 W", banks);
        Assert.Contains("25 W + (75 W || 75 W)", banks);
        Assert.DoesNotContain("75 W || 75 W || 75 W", banks);

        // Equal lamps make fewer banks than different ones.
        Assert.True(banks.Length < BankCombinations.Of(Shelf("25 W", "60 W", "75 W", "150 W")).Count());
    }

    [Fact]
    public void Combinations_EveryText_ReadsBackAsTheSameBank()
    {
        foreach (var (text, part) in BankCombinations.Of(Shelf("25 W", "75 W", "75 W", "150 W")))
        {
            Assert.Equal(new Bank(text, part).ColdOhms, Bank.Parse(text, Mains120).ColdOhms, 1e-9);
        }
    }

    [Fact]
    public void Choose_Rectifier_PutsAFittingBankFirst()
    {
        var answer = Choose("rectifier 45 W 470 uF", "25 W", "75 W", "75 W", "150 W");
        var best = answer.Choices[0];
        Assert.Equal("fits", best.Verdict);
        Assert.True(best.UnitVoltsShare > 0.8 && best.Contrast > 2);
        var verdicts = answer.Choices.Select(choice => choice.Verdict).ToList();
        Assert.Contains("starves", verdicts);
        Assert.True(verdicts.LastIndexOf("fits") < verdicts.IndexOf("starves"), "fitting banks come first");
    }

    [Fact]
    public void Choose_SwitchModeBehindTooSmallLamps_CannotRun()
    {
        var answer = Choose("switch-mode 60 W", "25 W", "40 W");
        Assert.All(answer.Choices, choice => Assert.False(choice.Exists));
        Assert.Empty(answer.BringUp);
    }

    [Theory]
    [InlineData("rectifier 45 W 470 uF")]
    [InlineData("resistor 100 ohm")]
    [InlineData("transformer 60 VA 40 W")]
    public void Choose_BringUp_GoesFromTimidToBold(string unit)
    {
        var steps = Choose(unit, "25 W", "40 W", "60 W", "100 W", "150 W").BringUp;
        Assert.True(steps.Count >= 2);
        for (var index = 1; index < steps.Count; index++)
        {
            Assert.True(steps[index].ExpectHighAmps > steps[index - 1].ExpectHighAmps);
        }

        Assert.All(steps, step => Assert.True(step.ExpectLowAmps < step.ExpectHighAmps && step.ExpectHighAmps < step.StopAboveAmps));
    }

    // The table against the exact solution of each bank.
    [Theory]
    [InlineData("rectifier 45 W 470 uF")]
    [InlineData("lamp 60 W")]
    [InlineData("transformer 60 VA")]
    [InlineData("switch-mode 30 W")]
    public void Choose_TableOfTheUnit_AgreesWithTheFullSolution(string unitText)
    {
        var unit = Unit.Parse(unitText, Mains120);
        foreach (var choice in Choose(unitText, "40 W", "60 W", "100 W", "100 W").Choices.Where(choice => choice.Exists).Take(10))
        {
            var solver = new Lampwarden.Analysis.Prediction.SteadySolver(Bank.Parse(choice.Bank, Mains120), unit.NewResponse(Mains120));
            Assert.True(solver.TrySolve(120, out var point));
            Assert.Equal(1, choice.LineAmps / point.Amps, 0.004);
        }
    }

    [Fact]
    public void Choose_NoLamps_Throws() => Assert.Throws<ArgumentException>(() => Choose("resistor 100 ohm"));

    private static BankChoices Choose(string unit, params string[] shelf) =>
        BankChooser.Choose(Mains120, Unit.Parse(unit, Mains120), Shelf(shelf), most: 100);

    private static Lamp[] Shelf(params string[] lamps) => [.. lamps.Select(text => Bank.Parse(text, Mains120).Lamps[0])];
}
