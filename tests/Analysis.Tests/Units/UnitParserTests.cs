using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Tests.Units;

public sealed class UnitParserTests
{
    private static readonly Mains Mains120 = new(120, 60);

    [Theory]
    [InlineData("lamp 100 W", typeof(LampUnit))]
    [InlineData("lamp100W", typeof(LampUnit))]
    [InlineData("resistor 50 ohm", typeof(ResistorUnit))]
    [InlineData("resistor 1.2 kohm", typeof(ResistorUnit))]
    [InlineData("heater 800 W", typeof(HeaterUnit))]
    [InlineData("heater 800 W cold 12 ohm", typeof(HeaterUnit))]
    [InlineData("transformer 60 VA", typeof(TransformerUnit))]
    [InlineData("transformer 60 VA 40 W", typeof(TransformerUnit))]
    [InlineData("rectifier 45 W 470 uF", typeof(RectifierUnit))]
    [InlineData("rectifier 45 W 470µF 2 ohm", typeof(RectifierUnit))]
    [InlineData("switch-mode 60 W", typeof(SwitchModeUnit))]
    [InlineData("Switch-Mode 60 W 220 uF start 90 V stop 55 V", typeof(SwitchModeUnit))]
    [InlineData("motor 200 W", typeof(MotorUnit))]
    [InlineData("half-wave 60 W", typeof(HalfWaveUnit))]
    [InlineData("half-wave short", typeof(HalfWaveUnit))]
    [InlineData("half-wave 60 W 100 uF", typeof(RectifierUnit))]
    [InlineData("short", typeof(ResistorUnit))]
    [InlineData("open", typeof(ResistorUnit))]
    public void Parse_GoodText_MakesTheKind(string text, Type kind) => Assert.IsType(kind, Unit.Parse(text, Mains120));

    [Theory]
    [InlineData("", 0)]
    [InlineData("toaster 800 W", 0)]
    [InlineData("resistor", 8)]
    [InlineData("resistor 50 W", 9)]
    [InlineData("resistor -50 ohm", 9)]
    [InlineData("lamp 0 W", 5)]
    [InlineData("rectifier 45 W", 14)]
    [InlineData("rectifier 45 W 470 F", 15)]
    [InlineData("transformer 60 W", 12)]
    [InlineData("transformer 60 VA 90 W", 18)]
    [InlineData("heater 800 W cold 50 ohm", 18)]
    [InlineData("switch-mode 60 W start 60 V stop 80 V", 28)]
    [InlineData("short 5 W", 6)]
    [InlineData("shorted", 0)]
    [InlineData("motor 200 W 5", 12)]
    public void Parse_NotAUnit_MarksThePlace(string text, int position)
    {
        var fault = Assert.Throws<TextFormatException>(() => Unit.Parse(text, Mains120));
        Assert.Equal((text, position), (fault.Input, fault.Position));
        Assert.Contains("unit: expected", fault.Message, StringComparison.Ordinal);
    }

    // Watts are what the unit takes at nominal mains, whatever is inside.
    [Theory]
    [InlineData("lamp 100 W", 100, 0.001)]
    [InlineData("heater 800 W", 800, 0.001)]
    [InlineData("rectifier 45 W 470 uF", 45, 0.001)]
    [InlineData("half-wave 60 W", 60, 0.015)]
    [InlineData("half-wave 60 W 100 uF", 60, 0.001)]
    [InlineData("switch-mode 60 W", 60, 0.015)]
    [InlineData("motor 200 W", 200, 0.001)]
    public void Response_AtNominalMains_TakesThePlatesWatts(string text, double watts, double within)
    {
        foreach (var mains in new[] { Mains120, new Mains(230, 50) })
        {
            Assert.Equal(1, Unit.Parse(text, mains).NewResponse(mains).At(mains.Volts, 1e-3).Watts / watts, within);
        }
    }
}
