using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Tests.Lamps;

public sealed class BankParserTests
{
    private static readonly Mains Mains120 = new(120, 60);

    [Fact]
    public void Parse_ParallelBindsTighterThanSeries()
    {
        var bank = Bank.Parse("75 W || 25 W + 150 W", Mains120);
        var series = Assert.IsType<SeriesPart>(bank.Root);
        Assert.IsType<ParallelPart>(series.Parts[0]);
        Assert.Equal(150, Assert.IsType<LampPart>(series.Parts[1]).Lamp.RatedWatts);
    }

    [Fact]
    public void Parse_ColdOhms_JoinLikeResistors()
    {
        var bank = Bank.Parse("(8 ohm || 8 ohm) + (2 ohm + 6 ohm || 6 ohm)", Mains120);
        Assert.Equal(9, bank.ColdOhms, 1e-12);
    }

    [Theory]
    [InlineData("60W", 60, 120)]
    [InlineData("60 W 230 V", 60, 230)]
    [InlineData("0.06 kW 130V", 60, 130)]
    public void Parse_Rating_ReadsWattsAndVolts(string text, double watts, double volts)
    {
        var lamp = Bank.Parse(text, Mains120).Lamps.Single();
        Assert.Equal((watts, volts), (lamp.RatedWatts, lamp.RatedVolts));
    }

    [Fact]
    public void Parse_RatedVoltsNotGiven_SaysWhatWasAssumed()
    {
        Assert.Contains("120 V", Assert.Single(Bank.Parse("60 W || 60 W", Mains120).Notes), StringComparison.Ordinal);
        Assert.Empty(Bank.Parse("60 W 120 V", Mains120).Notes);
    }

    [Fact]
    public void Parse_InventoryName_FindsTheLamp()
    {
        var inventory = new LampInventory([Lamp.FromNameplate("north", 60, 130)]);
        Assert.Equal(130, Bank.Parse("North || 60 W", Mains120, inventory).Lamps[0].RatedVolts);
    }

    [Fact]
    public void Parse_EqualLamps_GetTheirOwnNames() =>
        Assert.Equal(["75 W", "75 W (2)"], Bank.Parse("75 W || 75 W", Mains120).Lamps.Select(lamp => lamp.Name));

    [Theory]
    [InlineData("", 0)]
    [InlineData("60", 2)]
    [InlineData("60 W |", 5)]
    [InlineData("60 W ||", 7)]
    [InlineData("60 W || )", 8)]
    [InlineData("(60 W", 5)]
    [InlineData("-5 W", 0)]
    [InlineData("0 W", 0)]
    [InlineData("60 V", 0)]
    [InlineData("60,5 W", 2)]
    [InlineData("60 W 9000 V", 5)]
    [InlineData("60 W + south", 7)]
    [InlineData("60 W 60 W", 5)]
    [InlineData("60 W)", 4)]
    [InlineData("1e3 W", 1)]
    public void Parse_NotABank_MarksThePlace(string text, int position)
    {
        var fault = Assert.Throws<TextFormatException>(() => Bank.Parse(text, Mains120));
        Assert.Equal((text, position), (fault.Input, fault.Position));
        Assert.Contains("bank: expected", fault.Message, StringComparison.Ordinal);
        Assert.Contains("(75 W || 25 W) + 150 W", fault.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Parse_DeepNesting_IsRefusedNotCrashed() =>
        Assert.Throws<TextFormatException>(() => Bank.Parse(new string('(', 1900), Mains120));

    [Fact]
    public void Parse_LampOfMinusFiveWatts_NamesItInTheMessage() =>
        Assert.Equal(
            "bank: expected a lamp of 1 to 2000 W, found '-5 W'.\n  60 W || -5 W\n          ^\nWrite for example: (75 W || 25 W) + 150 W",
            Assert.Throws<TextFormatException>(() => Bank.Parse("60 W || -5 W", Mains120)).Message);

    [Theory]
    [InlineData("120 V 60 Hz", 120, 60)]
    [InlineData("230V50Hz", 230, 50)]
    public void MainsParse_GoodText_ReadsBoth(string text, double volts, double hertz) =>
        Assert.Equal(new Mains(volts, hertz), Mains.Parse(text));

    [Theory]
    [InlineData("120 V", 5)]
    [InlineData("60 Hz 120 V", 0)]
    [InlineData("9 V 60 Hz", 0)]
    [InlineData("120 V 400 Hz", 6)]
    [InlineData("120 V 60 Hz DC", 12)]
    public void MainsParse_BadText_MarksThePlace(string text, int position) =>
        Assert.Equal(position, Assert.Throws<TextFormatException>(() => Mains.Parse(text)).Position);
}
