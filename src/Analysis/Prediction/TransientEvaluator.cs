using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

/// <summary>The switch-on of a bench as a vector of numbers for values of its inputs: what a meter and an eye would see.</summary>
internal sealed class TransientEvaluator(
    Mains mains, BenchInputs inputs, PredictionSettings settings, double phaseDegrees, double mostSeconds, bool[] willGlow, Unit unit)
{
    public const int Peak = 0;
    public const int FirstCycle = 1;
    public const int Settle = 2;
    public const int FirstReading = 3;
    public const int LeastFirstReading = 4;
    public const int FirstLamp = 5;

    /// <summary>Simulates the bench of these values until all is quiet.</summary>
    /// <param name="values">Of the inputs.</param>
    /// <param name="steadyAmps">Where that bench's current ends.</param>
    /// <param name="longestSeconds">To end at the latest, if before the limit of them all.</param>
    public SwitchOn Run(ReadOnlySpan<double> values, double steadyAmps, double longestSeconds = double.MaxValue)
    {
        var simulation = Make(values);
        return SwitchOn.Run(simulation, steadyAmps, willGlow, LeastSeconds, Math.Min(mostSeconds, longestSeconds));
    }

    /// <summary>How long a bench a little different from this run's must be simulated for the same numbers: what happened, half as long again and more.</summary>
    public double Horizon(SwitchOn run, double steadyAmps)
    {
        var settle = run.SettleSeconds(steadyAmps);
        var glow = run.FirstGlowSeconds.Where(double.IsFinite).DefaultIfEmpty(0).Max();
        return double.IsNaN(settle) ? mostSeconds : Math.Max(LeastSeconds, 2.5 * Math.Max(settle, glow) + 0.3);
    }

    /// <summary>The numbers of a run.</summary>
    public double[] Numbers(SwitchOn run, double steadyAmps)
    {
        var numbers = new double[FirstLamp + willGlow.Length];
        numbers[Peak] = run.PeakAmps;
        numbers[FirstCycle] = run.RmsAmps(0, 1 / mains.Hertz);
        numbers[Settle] = run.SettleSeconds(steadyAmps);
        (numbers[FirstReading], numbers[LeastFirstReading]) = MeterView.First(run, settings.Meter);
        run.FirstGlowSeconds.CopyTo(numbers, FirstLamp);
        return numbers;
    }

    /// <summary>Peak of the first cycle only: for the shorted bank.</summary>
    public double PeakAmps(ReadOnlySpan<double> values)
    {
        var simulation = Make(values);
        var peak = Math.Abs(simulation.LineAmps);
        for (var step = 0; step < simulation.StepsPerCycle; step++)
        {
            simulation.Step();
            peak = Math.Max(peak, Math.Abs(simulation.LineAmps));
        }

        return peak;
    }

    // Two windows, however they lie; a converter needs some of its time constants.
    private double LeastSeconds => (settings.Meter.Response == MeterResponse.FirstOrder ? 8 : 2.2) * settings.Meter.WindowSeconds + 0.05;

    private CircuitSimulation Make(ReadOnlySpan<double> values)
    {
        var bank = inputs.BankOf(values);
        var room = Enumerable.Repeat(inputs.RoomKelvin(values), bank.Lamps.Count).ToArray();
        return new CircuitSimulation(
            mains with { Volts = inputs.MainsVolts(values) }, bank, BenchInputs.Scaled(unit, values), phaseDegrees, room, settings.SourceOhms);
    }
}
