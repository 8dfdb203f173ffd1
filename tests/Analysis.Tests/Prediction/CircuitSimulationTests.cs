using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Tests.Prediction;

public sealed class CircuitSimulationTests
{
    private static readonly Mains Mains120 = new(120, 60);

    [Fact]
    public void LineAmps_ColdAtTheVoltagePeak_IsOhmsLaw()
    {
        var bank = Bank.Parse("60 W", Mains120);
        var simulation = new CircuitSimulation(Mains120, bank, ResistorUnit.Short, 90);
        Assert.Equal(120 * Math.Sqrt(2) / bank.ColdOhms, simulation.LineAmps, 1e-4);
    }

    [Theory]
    [InlineData("60 W", "short")]
    [InlineData("60 W || 40 W", "lamp 100 W")]
    [InlineData("(75 W || 25 W) + 150 W", "resistor 50 ohm")]
    public void Run_LongEnough_EndsAtTheSteadySolution(string bankText, string unitText)
    {
        var bank = Bank.Parse(bankText, Mains120);
        var unit = Unit.Parse(unitText, Mains120);
        var simulation = new CircuitSimulation(Mains120, bank, unit);
        simulation.Run(8);
        var steady = new SteadySolver(bank, unit.NewResponse(Mains120)).Solve(120).Amps;

        // Taking a sinusoid by its RMS values is good to 0.03 %: the filament follows the cycle a little.
        Assert.Equal(1, simulation.Run(1) / steady, 0.0006);
    }

    [Fact]
    public void Coast_AfterALoadChange_EndsAtTheSteadySolution()
    {
        var bank = Bank.Parse("60 W || 40 W", Mains120);
        var simulation = new CircuitSimulation(Mains120, bank, new ResistorUnit("healthy", 240));
        simulation.Coast(10);
        simulation.ReplaceUnit(new ResistorUnit("worse", 60));
        var soon = simulation.Coast(0.002);
        var late = simulation.Coast(10);
        var steady = new SteadySolver(bank, new ResistorUnit("worse", 60).NewResponse(Mains120)).Solve(120).Amps;
        Assert.Equal(1, late / steady, 1e-4);
        Assert.True(soon > 1.1 * late, "a warmer bank must take its time");
    }

    [Fact]
    public void Coast_AndRun_AgreeOnTheWarmUp()
    {
        var bank = Bank.Parse("60 W + 100 W", Mains120);
        var stepped = new CircuitSimulation(Mains120, bank, ResistorUnit.Short, 30);
        var coasted = new CircuitSimulation(Mains120, bank, ResistorUnit.Short, 30);
        stepped.Run(0.5);
        coasted.Coast(0.5);
        Assert.Equal(1, coasted.FilamentKelvin[1] / stepped.FilamentKelvin[1], 0.01);
    }

    [Fact]
    public void FaultOhms_AcrossTheUnit_IsAParallelResistor()
    {
        var bank = Bank.Parse("60 W", Mains120);
        var faulted = new CircuitSimulation(Mains120, bank, new ResistorUnit("unit", 300)) { FaultOhms = 150 };
        var plain = new CircuitSimulation(Mains120, bank, new ResistorUnit("both", 100));
        Assert.Equal(plain.Run(0.3), faulted.Run(0.3), 1e-9);
        Assert.Equal(plain.Coast(5), faulted.Coast(5), 1e-9);
    }

    [Fact]
    public void SetLampOut_OneOfTwo_LeavesTheOther()
    {
        var simulation = new CircuitSimulation(Mains120, Bank.Parse("60 W || 60 W", Mains120), ResistorUnit.Short);
        var both = simulation.Coast(5);
        simulation.SetLampOut(1, true);

        // Coasting stops following a filament that moves by less than half a kelvin a second.
        Assert.Equal(both / 2, simulation.Coast(5), 1e-4);
        simulation.SetLampOut(1, false);
        Assert.Equal(both, simulation.Coast(20), 1e-4);
    }

    [Fact]
    public void Step_AndCoast_AllocateNothing()
    {
        var bank = Bank.Parse("(75 W || 25 W) + 150 W", Mains120);
        var simulation = new CircuitSimulation(Mains120, bank, Unit.Parse("lamp 100 W", Mains120));
        simulation.Run(0.1);
        simulation.Coast(0.1);
        var before = GC.GetAllocatedBytesForCurrentThread();
        simulation.Run(0.2);
        simulation.Coast(0.2);
        Assert.Equal(0, GC.GetAllocatedBytesForCurrentThread() - before);
    }
}
