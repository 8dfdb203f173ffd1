using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Tungsten;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

/// <summary>A cold switch-on as simulated: the current at every step and each lamp's temperature twenty times a cycle.</summary>
public sealed class SwitchOn
{
    private const double SettledShare = 0.10;

    // Ends once a cycle's RMS has stayed this near the steady value, and hardly moved from cycle to cycle, for this long.
    private const double NearShare = 0.012;
    private const double MovingShare = 0.0004;
    private const double QuietSeconds = 0.25;

    private readonly List<double> amps = [];
    private readonly List<double>[] kelvin;

    private readonly int perCycle;

    private SwitchOn(int lamps, CircuitSimulation simulation)
    {
        (StepSeconds, perCycle) = (simulation.StepSeconds, simulation.StepsPerCycle);
        kelvin = [.. Enumerable.Range(0, lamps).Select(_ => new List<double>())];
        FirstGlowSeconds = [.. Enumerable.Repeat(double.NaN, lamps)];
    }

    /// <summary>Time between two values of <see cref="Amps"/>.</summary>
    public double StepSeconds { get; }

    /// <summary>Time between two values of <see cref="Kelvin"/>.</summary>
    public double KelvinSeconds => StepSeconds * KelvinEvery;

    private int KelvinEvery => perCycle / 20;

    /// <summary>Instantaneous line current, beginning with the instant of switching.</summary>
    public IReadOnlyList<double> Amps => amps;

    /// <summary>First visible glow of each lamp; NaN for never.</summary>
    public double[] FirstGlowSeconds { get; }

    /// <summary>Highest instantaneous current, without its sign.</summary>
    public double PeakAmps { get; private set; }

    /// <summary>Temperatures of one lamp.</summary>
    public IReadOnlyList<double> Kelvin(int lamp) => kelvin[lamp];

    /// <summary>Simulates until all is quiet, every lamp that will glow glows and the meter's first windows are over.</summary>
    /// <param name="simulation">Just reset.</param>
    /// <param name="steadyAmps">Where the current will end; NaN where it never settles.</param>
    /// <param name="willGlow">Lamps whose steady temperature is above the first visible glow.</param>
    /// <param name="leastSeconds">Not to end before.</param>
    /// <param name="mostSeconds">To end at the latest.</param>
    public static SwitchOn Run(CircuitSimulation simulation, double steadyAmps, ReadOnlySpan<bool> willGlow, double leastSeconds, double mostSeconds)
    {
        var run = new SwitchOn(simulation.FilamentKelvin.Length, simulation);
        run.Note(simulation);
        var squares = 0.0;
        var (quiet, before) = (0.0, 0.0);
        while (simulation.Seconds < mostSeconds)
        {
            simulation.Step();
            run.Note(simulation);
            squares += run.amps[^1] * run.amps[^1];
            if (run.amps.Count % run.perCycle == 1)
            {
                var rms = Math.Sqrt(squares / run.perCycle);
                squares = 0;
                var cycle = run.StepSeconds * run.perCycle;
                var isQuiet = Math.Abs(rms / steadyAmps - 1) < NearShare && Math.Abs(rms - before) < MovingShare * rms;
                (quiet, before) = (isQuiet ? quiet + cycle : 0, rms);
                if (quiet >= QuietSeconds && simulation.Seconds >= leastSeconds && run.AllGlow(willGlow))
                {
                    break;
                }
            }
        }

        return run;
    }

    /// <summary>Highest current over the first cycle for switching at twelve phases, and the phase of the worst.</summary>
    public static (double PhaseDegrees, double PeakAmps) WorstPhase(Mains mains, Bank bank, Unit unit, double sourceOhms)
    {
        var (worst, peak) = (0.0, 0.0);
        var simulation = new CircuitSimulation(mains, bank, unit, sourceOhms: sourceOhms);
        for (var phase = 0; phase < 180; phase += 15)
        {
            simulation.Reset(phase);
            var highest = Math.Abs(simulation.LineAmps);
            for (var step = 0; step < simulation.StepsPerCycle; step++)
            {
                simulation.Step();
                highest = Math.Max(highest, Math.Abs(simulation.LineAmps));
            }

            if (highest > peak)
            {
                (worst, peak) = (phase, highest);
            }
        }

        return (worst, peak);
    }

    /// <summary>What a meter shows, its first window beginning with the switch-on: end of each window and reading.</summary>
    public IReadOnlyList<(double Seconds, double Amps)> Readings(PredictedMeter meter) => MeterView.Readings(amps, StepSeconds, meter);

    /// <summary>True RMS over a stretch, in A; NaN where it reaches beyond what was simulated.</summary>
    public double RmsAmps(double fromSeconds, double seconds)
    {
        var first = (int)Math.Round(fromSeconds / StepSeconds);
        var count = Math.Max(1, (int)Math.Round(seconds / StepSeconds));
        if (first + count >= amps.Count)
        {
            return double.NaN;
        }

        var sum = 0.5 * (amps[first] * amps[first] + amps[first + count] * amps[first + count]);
        for (var index = first + 1; index < first + count; index++)
        {
            sum += amps[index] * amps[index];
        }

        return Math.Sqrt(sum / count);
    }

    /// <summary>From when on the RMS current of one cycle, counted at its middle, stays within 10 % of the steady one.</summary>
    public double SettleSeconds(double steadyAmps)
    {
        if (!(steadyAmps > 0) || amps.Count <= perCycle)
        {
            return double.NaN;
        }

        var sum = 0.0;
        var last = -1;
        for (var index = 1; index < amps.Count; index++)
        {
            sum += amps[index] * amps[index] - (index > perCycle ? amps[index - perCycle] * amps[index - perCycle] : 0);
            if (index >= perCycle && Math.Abs(Math.Sqrt(Math.Max(0, sum) / perCycle) / steadyAmps - 1) > SettledShare)
            {
                last = index;
            }
        }

        return last < 0 ? 0 : last >= amps.Count - 1 ? double.NaN : (last + 1 - perCycle / 2) * StepSeconds;
    }

    private void Note(CircuitSimulation simulation)
    {
        var current = simulation.LineAmps;
        PeakAmps = Math.Max(PeakAmps, Math.Abs(current));
        var temperatures = simulation.FilamentKelvin;
        for (var lamp = 0; lamp < kelvin.Length; lamp++)
        {
            if (amps.Count % KelvinEvery == 0)
            {
                kelvin[lamp].Add(temperatures[lamp]);
            }

            if (double.IsNaN(FirstGlowSeconds[lamp]) && temperatures[lamp] >= TungstenProperties.FirstGlowKelvin)
            {
                FirstGlowSeconds[lamp] = simulation.Seconds;
            }
        }

        amps.Add(current);
    }

    private bool AllGlow(ReadOnlySpan<bool> willGlow)
    {
        for (var lamp = 0; lamp < willGlow.Length; lamp++)
        {
            if (willGlow[lamp] && double.IsNaN(FirstGlowSeconds[lamp]))
            {
                return false;
            }
        }

        return true;
    }
}
