namespace Lampwarden.Acquisition.Tests;

public sealed class MeterRulesTests
{
    [Theory]
    [InlineData(Quantity.LineCurrent, "CONFigure:CURRent:AC 3")]
    [InlineData(Quantity.MainsVoltage, "CONFigure:VOLTage:AC 300")]
    public void Warnings_NoRange_NamesOneOfTheQuantityMeasured(Quantity quantity, string setUp)
    {
        var warning = Assert.Single(MeterRules.Warnings(new MeterOptions { Quantity = quantity }));
        Assert.Contains(setUp, warning, StringComparison.Ordinal);
    }
}
