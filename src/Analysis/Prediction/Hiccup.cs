using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

/// <summary>A supply that starts and stops for ever, from the simulation.</summary>
/// <param name="StartsPerSecond">How often it starts; 0 where it never does, or stays on.</param>
/// <param name="OnShare">Share of the time it is on, 0 to 1.</param>
/// <param name="LineAmps">True RMS line current over the whole.</param>
internal sealed record Hiccup(double StartsPerSecond, double OnShare, double LineAmps)
{
    private const double SettleSeconds = 4;
    private const double WatchSeconds = 8;

    public static Hiccup Of(Mains mains, Bank bank, SwitchModeUnit unit, double sourceOhms)
    {
        var simulation = new CircuitSimulation(mains, bank, unit, sourceOhms: sourceOhms);
        simulation.Run(SettleSeconds);
        var count = (int)Math.Round(WatchSeconds / simulation.StepSeconds);
        double squares = 0, on = 0, before = simulation.UnitState[1];
        var starts = 0;
        for (var step = 0; step < count; step++)
        {
            simulation.Step();
            var now = simulation.UnitState[1];
            starts += now > before ? 1 : 0;
            on += now;
            squares += simulation.LineAmps * simulation.LineAmps;
            before = now;
        }

        return new Hiccup(starts / WatchSeconds, on / count, Math.Sqrt(squares / count));
    }
}
