using Lampwarden.Analysis.Checks;

namespace Lampwarden.Analysis.Tests.Checks;

public sealed class ExternalChecksTests
{
    public static TheoryData<string> Rows => [.. PublishedFigures.All().Select(row => row.Group).Distinct()];

    public static TheoryData<string> Circuits => [.. NgspiceComparison.Circuits.Select(circuit => circuit.What)];

    [Theory]
    [MemberData(nameof(Rows))]
    public void Model_PublishedFigures_WithinTheStatedTolerance(string group)
    {
        foreach (var row in PublishedFigures.All().Where(row => row.Group == group))
        {
            Assert.True(row.Holds, $"{row.What}: {row.Ours} for {row.Published} ({100 * row.Residual:0.0} %)");
        }
    }

    [Theory]
    [MemberData(nameof(Circuits))]
    public void Run_SameCircuit_AgreesWithNgspice(string what)
    {
        var program = Outside.Program("ngspice");
        var circuit = NgspiceComparison.Circuits.Single(candidate => candidate.What == what);
        Assert.InRange(NgspiceComparison.Difference(program, circuit), 0, circuit.Within);
    }

    [Fact]
    public void Run_StiffMotorBehindALamp_AgreesWithScipy()
    {
        var python = ScipyComparison.FindPython();
        Outside.Need(python is not null, "no python3 with scipy is installed");
        var (amps, kelvin) = ScipyComparison.Difference(python!);
        Assert.InRange(amps, -0.001, 0.001);
        Assert.InRange(kelvin, -0.001, 0.001);
    }
}
