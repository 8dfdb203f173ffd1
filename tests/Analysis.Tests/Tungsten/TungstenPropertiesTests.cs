using Lampwarden.Analysis.Tungsten;

namespace Lampwarden.Analysis.Tests.Tungsten;

public sealed class TungstenPropertiesTests
{
    // R/R300 as printed beside the resistivities of Jones and Langmuir, General Electric Review 30 (1927) 310.
    [Theory]
    [InlineData(300, 1.00)]
    [InlineData(500, 1.87)]
    [InlineData(800, 3.36)]
    [InlineData(1000, 4.41)]
    [InlineData(1500, 7.14)]
    [InlineData(2000, 10.03)]
    [InlineData(2500, 13.08)]
    [InlineData(2800, 14.99)]
    [InlineData(3000, 16.29)]
    [InlineData(3600, 20.35)]
    public void ResistanceRatio_PublishedRow_WithinOnePercent(double kelvin, double published) =>
        Assert.Equal(1, TungstenProperties.ResistanceRatio(kelvin) / published, 0.01);

    [Fact]
    public void ResistanceRatio_EveryKelvin_Rises()
    {
        for (var kelvin = 270; kelvin < 3650; kelvin++)
        {
            Assert.True(TungstenProperties.ResistanceRatio(kelvin + 1) > TungstenProperties.ResistanceRatio(kelvin), $"falls at {kelvin} K");
        }
    }

    // W. E. Forsythe and A. G. Worthing, Astrophys. J. 61 (1925) 146, recalled from memory; the two sets differ by up to 7 % at 1000 K.
    [Theory]
    [InlineData(1500, 0.192, 0.01)]
    [InlineData(2000, 0.260, 0.02)]
    [InlineData(2500, 0.303, 0.045)]
    [InlineData(3000, 0.334, 0.05)]
    public void Emissivity_SecondPublishedSet_Agrees(double kelvin, double published, double within) =>
        Assert.Equal(1, TungstenProperties.Emissivity(kelvin) / published, within);

    // NIST-JANAF tables, 4th edition 1998, Shomate coefficients; good below 3000 K only.
    [Theory]
    [InlineData(300, 132.3)]
    [InlineData(1000, 149.9)]
    [InlineData(2000, 175.6)]
    [InlineData(2900, 212.6)]
    public void SpecificHeat_SecondPublishedSet_WithinThreePercent(double kelvin, double published) =>
        Assert.Equal(1, TungstenProperties.SpecificHeat(kelvin) / published, 0.03);

    // The stated bounds: what another choice of published tables would change.
    [Fact]
    public void Tables_OtherPublishedSet_BoundsTheOneInUse()
    {
        for (var row = 15; row <= 30; row++)
        {
            var kelvin = TungstenTable.FirstKelvin + row * TungstenTable.StepKelvin;
            Assert.InRange(TungstenTable.ModernTotalEmissivity[row] / TungstenProperties.Emissivity(kelvin), 0.90, 0.95);
            var pure = TungstenTable.WhiteMingesMicroOhmCentimetres[row] / TungstenTable.WhiteMingesMicroOhmCentimetres[0];
            Assert.InRange(pure / TungstenProperties.ResistanceRatio(kelvin), 1.03, 1.06);
        }
    }

    [Fact]
    public void KelvinOfRatio_OfAnyTemperature_GivesItBack()
    {
        for (var kelvin = 280; kelvin < 3600; kelvin += 37)
        {
            Assert.Equal(kelvin, TungstenProperties.KelvinOfRatio(TungstenProperties.ResistanceRatio(kelvin)), 1e-6);
        }
    }

    [Fact]
    public void KelvinOfRatio_BeyondMelting_Throws() =>
        Assert.Throws<ArgumentOutOfRangeException>(() => TungstenProperties.KelvinOfRatio(25));
}
