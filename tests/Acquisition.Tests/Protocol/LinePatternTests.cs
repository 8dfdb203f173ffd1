using System.Text;
using Lampwarden.Acquisition.Protocol;
using Lampwarden.Acquisition.Tests.Support;

namespace Lampwarden.Acquisition.Tests.Protocol;

public sealed class LinePatternTests
{
    [Theory]
    [InlineData("words", "AC 0.4125 A", 0.4125, 4)]
    [InlineData("words", " AC   412.5 mA\0", 0.4125, 4)]
    [InlineData("words", "AC -0.001 A", -0.001, 3)]
    [InlineData("fields", "I;+412.5;mA;AUTO", 0.4125, 4)]
    [InlineData("fields", "I;-17;uA;", -0.000017, 6)]
    [InlineData("columns", "A~+04125-4 .", 0.4125, 4)]
    [InlineData("columns", "A~-00017+1 .", -170, 0)]
    public void Read_LinesOfTheExamples_GiveExactValuesAndDecimals(string dialect, string line, double value, int digits) =>
        Assert.Equal(MeterValue.Number(value, digits), Read(Examples.Meter(dialect), line));

    [Theory]
    [InlineData("words", "AC O.L A")]
    [InlineData("fields", "I;+OL;mA;AUTO")]
    [InlineData("columns", "A~+-----+0 .")]
    public void Read_OverloadWords_AreOverloadsAndNeverNumbers(string dialect, string line) =>
        Assert.Equal((MeterEventKind.Overload, double.NaN), Read(Examples.Meter(dialect), line) is var value ? (value.Kind, value.Value) : default);

    [Theory]
    [InlineData("words", "AC 0.4125", "does not fit protocol.pattern")]
    [InlineData("words", "0.4125 A AC 0.4125 A", "does not fit protocol.pattern")]
    [InlineData("words", "DC 0.4125 A", "is a DC reading; set the meter to AC")]
    [InlineData("words", "AC 119.62 V", "shows V where A is wanted: is the dial right?")]
    [InlineData("fields", "I;+412.5;mA;AUTO HOLD", "is marked HOLD")]
    [InlineData("fields", "I;+41\02.5;mA;AUTO", "does not fit protocol.pattern")]
    [InlineData("columns", "A=+04125-4 .", "is a DC reading")]
    [InlineData("columns", "A~+04125-4 H", "is marked H")]
    [InlineData("columns", "A~+0412-4 .", "does not fit protocol.pattern")]
    public void Read_AnythingElse_IsRefusedAndSaysWhy(string dialect, string line, string why)
    {
        var value = Read(Examples.Meter(dialect), line);

        Assert.Equal((MeterEventKind.Gap, GapReason.NotANumber), (value.Kind, value.Reason));
        Assert.Contains(why, value.Detail, StringComparison.Ordinal);
    }

    [Fact]
    public void Read_UnitOfTheConfiguration_StandsInWhereTheLineNamesNone()
    {
        var meter = Meter("^(?<value>[0-9,]+)$");
        meter.Protocol.Unit = "mA";
        meter.Protocol.DecimalComma = true;

        Assert.Equal(MeterValue.Number(0.4125, 4), Read(meter, "412,5"));
    }

    [Fact]
    public void Read_WordsForUnitsAndCodesForPowers_AreTakenFromTheConfiguration()
    {
        var meter = Meter("^(?<value>[0-9]{4})(?<exponent>[a-c])(?<unit>[A-Z]+)$");
        meter.Protocol.UnitWords = ["MAMP=mA", "AMP=A"];
        meter.Protocol.ExponentWords = ["a=0", "b=-1", "c=-3"];

        Assert.Equal(MeterValue.Number(0.4125, 4), Read(meter, "4125bMAMP"));
        Assert.Equal(MeterValue.Number(4.125, 3), Read(meter, "4125cAMP"));
        Assert.Contains("'WATT', which is none of ours", Read(meter, "4125cWATT").Detail, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("\u00B5A")] // one byte in Latin-1
    [InlineData("\u00C2\u00B5A")] // two bytes of UTF-8 read as Latin-1
    [InlineData("uA")]
    public void Read_MicroSigns_AreAllOne(string unit) =>
        Assert.Equal(MeterValue.Number(0.0004125, 7), Read(Meter("^(?<value>[0-9.]+) (?<unit>.+)$"), "412.5 " + unit));

    [Fact]
    public void Read_PatternThatBacktracksWithoutEnd_IsCutOffAndTold()
    {
        var meter = Meter("^(?<value>(([0-9])+)+)x$");

        Assert.Contains("backtracks without end", Read(meter, new string('1', 60)).Detail, StringComparison.Ordinal);
    }

    [Fact]
    public void Read_LinesToIgnore_AreNotForUs()
    {
        new LinePattern(Examples.Meter("fields")).Read("# Nowhere 3, firmware 2"u8, out var notForUs);

        Assert.True(notForUs);
    }

    private static MeterOptions Meter(string pattern) => new() { Name = "line", Protocol = { Kind = "lines", Pattern = pattern } };

    private static MeterValue Read(MeterOptions meter, string line) => new LinePattern(meter).Read(Encoding.Latin1.GetBytes(line));
}
