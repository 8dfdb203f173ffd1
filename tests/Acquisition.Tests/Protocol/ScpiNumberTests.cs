using System.Text;
using Lampwarden.Acquisition.Protocol;

namespace Lampwarden.Acquisition.Tests.Protocol;

public sealed class ScpiNumberTests
{
    // IEEE 488.2 forms NR1, NR2, NR3, and what instruments make of them.
    [Theory]
    [InlineData("273", 273, 0)]
    [InlineData("-12", -12, 0)]
    [InlineData("+0", 0, 0)]
    [InlineData("0.273", 0.273, 3)]
    [InlineData("-1.", -1, 0)]
    [InlineData("2.73E+2", 273, 0)]
    [InlineData("+1.23456789E-03", 0.00123456789, 11)]
    [InlineData("4.120e-01", 0.412, 4)]
    [InlineData(" \t+4.12E-1\0\r", 0.412, 3)]
    [InlineData("1E0", 1, 0)]
    public void Read_StandardForms_GiveValueAndDecimals(string text, double value, int digits) =>
        Assert.Equal(MeterValue.Number(value, digits), Read(text));

    // SCPI-1999 volume 1, 7.2.1.4 and 7.2.1.5.
    [Theory]
    [InlineData("9.9E37", MeterEventKind.Overload, GapReason.None)]
    [InlineData("+9.90000000E+37", MeterEventKind.Overload, GapReason.None)]
    [InlineData("-9.9E+37", MeterEventKind.Overload, GapReason.None)]
    [InlineData("1E+300", MeterEventKind.Overload, GapReason.None)]
    [InlineData("1E+9999", MeterEventKind.Overload, GapReason.None)]
    [InlineData("9.91E37", MeterEventKind.Gap, GapReason.MeterHasNoValue)]
    [InlineData("+9.91000000E+37", MeterEventKind.Gap, GapReason.MeterHasNoValue)]
    public void Read_SpecialValues_NeverBecomeNumbers(string text, MeterEventKind kind, GapReason reason)
    {
        var value = Read(text);

        Assert.Equal((kind, reason, double.NaN), (value.Kind, value.Reason, value.Value));
    }

    [Theory]
    [InlineData("")]
    [InlineData(".")]
    [InlineData("+")]
    [InlineData("0,412")]
    [InlineData("1 234")]
    [InlineData("0x10")]
    [InlineData("NaN")]
    [InlineData("Infinity")]
    [InlineData("1.2.3")]
    [InlineData("1E")]
    [InlineData("1E+")]
    [InlineData("1E+123456")]
    [InlineData("0.41\u00002")]
    [InlineData("0.412 A")]
    [InlineData("--1")]
    public void Read_AnythingElse_IsRefusedWithAnExcerpt(string text)
    {
        var value = Read(text);

        Assert.Equal((MeterEventKind.Gap, GapReason.NotANumber), (value.Kind, value.Reason));
        Assert.Contains("is not a number such as", value.Detail, StringComparison.Ordinal);
    }

    private static MeterValue Read(string text) => ScpiNumber.Read(Encoding.Latin1.GetBytes(text));
}
