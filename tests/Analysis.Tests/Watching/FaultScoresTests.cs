using Lampwarden.Analysis.Watching;
using Xunit;

namespace Lampwarden.Analysis.Tests.Watching;

public sealed class FaultScoresTests
{
    /// <summary>
    /// The recursion against the definition: the surprises of a filter fed with a fault differ from those of a filter fed without by exactly
    /// what the scores expect, so the estimated size is the true one where there is no noise.
    /// </summary>
    [Theory]
    [InlineData((int)FaultShape.Ramp, 0.05)]
    [InlineData((int)FaultShape.Step, 0.03)]
    [InlineData((int)FaultShape.QuickGrowth, 0.003)]
    public void Size_NoiselessFault_IsFoundExactly(int shapeNumber, double size)
    {
        var shape = (FaultShape)shapeNumber; // an internal type cannot stand in a public signature
        var model = new HealthyModel(mainsMeasured: true);
        model.Start(-0.7, 0.5, 0.1, 900, 0.2, 0.6, 0.5);
        var scores = new FaultScores();
        const double Noise = 1e-6;
        var onset = 0.0;
        for (var block = 0; block < 430; block++)
        {
            var (from, middle) = (block * 10.0, (block * 10.0) + 5);
            onset = block == 400 ? from : onset;
            var value = -0.7 + (block >= 400 ? size * FaultScores.Unit(shape, middle - onset) : 0);
            model.Advance(10);
            model.Compare(value, 0, Noise, 0);
            scores.Weigh(model, 0, from, middle);
            model.Learn();
        }

        var candidate = Enumerable.Range(0, scores.Count).Single(c => scores.Onset(c) == onset);
        Assert.Equal(size, scores.Size(candidate, shape).Size, size * 0.01); // states are kept in single precision
    }

    [Fact]
    public void Weigh_ADay_KeepsFewOnsetsDenseInTheNearPast()
    {
        var model = new HealthyModel(mainsMeasured: true);
        model.Start(0, 0.5, 0.1, 900, 0.2, 0.6, 0.5);
        var scores = new FaultScores();
        for (var block = 0; block < 8640; block++)
        {
            model.Advance(10);
            model.Compare(0, 0, 1e-6, 0);
            scores.Weigh(model, 0, block * 10.0, (block * 10.0) + 5);
            model.Learn();
        }

        Assert.InRange(scores.Count, 20, 48);
        Assert.True(scores.Onset(0) <= 10);
        for (var c = 1; c < scores.Count; c++)
        {
            var age = 86_400 - scores.Onset(c);
            Assert.True(scores.Onset(c) - scores.Onset(c - 1) <= Math.Max(20, 0.5 * age + 20));
        }
    }

    [Fact]
    public void Hypotheses_StepOfALamp_NamesThatLamp()
    {
        var expected = new Expectation { SteadyAmps = 1, Lamps = [new ExpectedLamp("north", 0.8), new ExpectedLamp("east", 0.9), new ExpectedLamp("west", 1, 1.3)] };
        Assert.Equal("north", Hypotheses.Weigh(Math.Log(0.81), 0.002, expected, true).Lamp!.Name);
        Assert.Equal("east", Hypotheses.Weigh(Math.Log(0.905), 0.002, expected, true).Lamp!.Name);
        Assert.Equal((Cause.LampLit, "west"), (Hypotheses.Weigh(Math.Log(1.3), 0.002, expected, true).Cause, Hypotheses.Weigh(Math.Log(1.3), 0.002, expected, true).Lamp!.Name));
        Assert.Equal(Cause.UnitTakesMore, Hypotheses.Weigh(Math.Log(2), 0.002, expected, true).Cause);
        Assert.Equal(Cause.CircuitOpened, Hypotheses.Weigh(-6, 0.01, expected, true).Cause);
        Assert.Equal(Cause.MeterScale, Hypotheses.Weigh(Math.Log(10), 0.002, expected, true).Cause);
    }
}
