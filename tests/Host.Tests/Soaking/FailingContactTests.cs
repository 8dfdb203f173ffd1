using Lampwarden.Simulator.Benches;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Host.Tests.Soaking;

/// <summary>A simulated unit that drops out and comes back.</summary>
public sealed class FailingContactTests
{
    [Fact]
    public void Rms_Cycling_DropsOutInStepUntilItIsOver()
    {
        var outs = Outs(new ScenarioFault { Kind = "cycling", AtSeconds = 30, EverySeconds = 20, OutSeconds = 5, ForSeconds = 60 }, seconds: 150);
        Assert.Equal([(30, 35), (50, 55), (70, 75)], outs);
    }

    [Fact]
    public void Rms_Intermittent_DropsOutAtRandomMoments_TheSameForTheSameSeed()
    {
        var fault = new ScenarioFault { Kind = "intermittent", AtSeconds = 30, EverySeconds = 30, OutSeconds = 4 };
        var outs = Outs(fault, seconds: 900);
        Assert.Equal(outs, Outs(fault, seconds: 900));
        Assert.InRange(outs.Count, 18, 42);
        var pauses = outs.Zip(outs.Skip(1), (one, next) => next.From - one.From).ToList();
        Assert.True(pauses.Distinct().Count() > 5, "a loose contact keeps no time");
    }

    [Fact]
    public void Rms_OpenedWhileItsContactFails_StaysOpen()
    {
        var scenario = Scenario();
        scenario.Faults.Add(new ScenarioFault { Kind = "cycling", AtSeconds = 10, EverySeconds = 10, OutSeconds = 2 });
        scenario.Faults.Add(new ScenarioFault { Kind = "open", AtSeconds = 25 });
        var bench = new SimulatedBench(scenario);
        Assert.True(bench.Rms(MeasuredQuantity.LineCurrent, 24, 0.2) > 0.1);
        Assert.All(Enumerable.Range(26, 30), second => Assert.True(bench.Rms(MeasuredQuantity.LineCurrent, second, 0.2) < 0.001));
    }

    private static Scenario Scenario() => new() { Name = "loose", Mains = "230 V 50 Hz", Bank = "100 W", Unit = "resistor 700 ohm", SwitchOnSeconds = 0, EndSeconds = 1000 };

    // Whole seconds in which no current flowed, as stretches.
    private static List<(int From, int To)> Outs(ScenarioFault fault, int seconds)
    {
        var scenario = Scenario();
        scenario.Faults.Add(fault);
        var bench = new SimulatedBench(scenario);
        var outs = new List<(int From, int To)>();
        for (var second = 1; second <= seconds; second++)
        {
            if (bench.Rms(MeasuredQuantity.LineCurrent, second, 0.5) >= 0.001)
            {
                continue;
            }

            if (outs is [.., var last] && last.To == second - 1)
            {
                outs[^1] = (last.From, second);
            }
            else
            {
                outs.Add((second - 1, second));
            }
        }

        return outs;
    }
}
