using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Fitting;

/// <summary>What is to be found out from a recorded switch-on.</summary>
[Flags]
public enum FitTargets
{
    /// <summary>The unit's rating: watts, or one over ohms.</summary>
    UnitRating = 1,

    /// <summary>The reservoir or bulk capacitor of a rectifier.</summary>
    Capacitance = 2,

    /// <summary>The lamps' watts, all by one factor.</summary>
    LampWatts = 4,

    /// <summary>The lamps' coil factor, all by one factor: how quick they are.</summary>
    CoilFactor = 8,
}

/// <summary>One reading of a recorded switch-on.</summary>
/// <param name="Seconds">End of the meter's window, since the switch closed.</param>
/// <param name="Amps">As shown.</param>
public readonly record struct SwitchOnReading(double Seconds, double Amps);

/// <summary>One fitted quantity, as a factor on what was supposed.</summary>
/// <param name="Target">Which.</param>
/// <param name="Factor">Found over supposed.</param>
/// <param name="StandardError">Of the factor, relative, one sigma.</param>
public sealed record FittedFactor(FitTargets Target, double Factor, double StandardError);

/// <summary>What a recorded switch-on and settled stretch say about unit and lamps.</summary>
/// <param name="Factors">In the order of the flags.</param>
/// <param name="Unit">The unit with its fitted rating and capacitor.</param>
/// <param name="Result">The fit itself: how it ended, residuals, covariance of the factors' logarithms.</param>
public sealed record BenchFitResult(IReadOnlyList<FittedFactor> Factors, Unit Unit, FitResult Result);

/// <summary>
/// Identification: the simulated readings of a switch-on are fitted to recorded ones. The phase of the mains at switching, which nobody knows,
/// moves a window reading of a resistive unit by less than 0.3 %, and is left out there; what a capacitor takes at first depends on it, so
/// with a capacitor to find the phase is fitted along, from several starts.
/// </summary>
public static class BenchFit
{
    // After this long the readings are the settled ones; later ones are compared with the last simulated cycle.
    private const double SimulatedSeconds = 6;
    private const double AnyPhaseDegrees = 45;
    private const double DegreesPerUnit = 57.29577951308232;
    private static readonly double[] StartPhases = [20, 80, 140];

    /// <summary>Fits.</summary>
    /// <param name="mains">The supply during the recording.</param>
    /// <param name="bank">The limiter, cold at the start.</param>
    /// <param name="unit">The unit as supposed, off for long at the start.</param>
    /// <param name="targets">What to find; more than the readings can tell ends as undetermined.</param>
    /// <param name="readings">From switch-on, a settled stretch included.</param>
    /// <param name="windowSeconds">The meter's true-RMS window.</param>
    /// <param name="relativeSigma">Noise of a reading, relative; weighs the readings against <paramref name="floorAmps"/>.</param>
    /// <param name="floorAmps">Noise of a reading, absolute: half a count or so.</param>
    /// <exception cref="ArgumentException">Too few readings, or a target that this unit does not have.</exception>
    public static BenchFitResult Fit(
        Mains mains,
        Bank bank,
        Unit unit,
        FitTargets targets,
        IReadOnlyList<SwitchOnReading> readings,
        double windowSeconds,
        double relativeSigma = 0.002,
        double floorAmps = 0.0005)
    {
        var wanted = Enum.GetValues<FitTargets>().Where(target => targets.HasFlag(target)).ToArray();
        if (readings.Count < wanted.Length + 2)
        {
            throw new ArgumentException($"{readings.Count} readings cannot tell {wanted.Length} quantities: give the first seconds after switch-on and a settled stretch.", nameof(readings));
        }

        if (targets.HasFlag(FitTargets.Capacitance) && unit is not (RectifierUnit or SwitchModeUnit))
        {
            throw new ArgumentException($"'{unit.Text}' has no capacitor to fit.", nameof(targets));
        }

        var last = readings.Max(reading => reading.Seconds);
        double[] Residuals(IReadOnlyList<double> logs)
        {
            var (moved, lamps) = Make(bank, unit, wanted, logs);
            var phase = logs.Count > wanted.Length ? DegreesPerUnit * logs[^1] : AnyPhaseDegrees;
            var shown = Simulate(mains, lamps, moved, readings, windowSeconds, Math.Min(last, SimulatedSeconds), phase);
            return [.. readings.Select((reading, index) =>
                (reading.Amps - shown[index]) / Math.Sqrt(Math.Pow(relativeSigma * reading.Amps, 2) + floorAmps * floorAmps))];
        }

        var starts = targets.HasFlag(FitTargets.Capacitance)
            ? StartPhases.Select(phase => (double[])[.. new double[wanted.Length], phase / DegreesPerUnit])
            : [new double[wanted.Length]];
        var result = starts.Select(start => LeastSquares.Fit(Residuals, start, 60)).MinBy(fit => fit.SumOfSquares)!;
        var (fitted, _) = Make(bank, unit, wanted, result.Parameters);
        var factors = wanted.Select((target, index) => new FittedFactor(target, Math.Exp(result.Parameters[index]), result.StandardErrors[index])).ToArray();
        return new BenchFitResult(factors, fitted, result);
    }

    private static (Unit Unit, Bank Bank) Make(Bank bank, Unit unit, FitTargets[] wanted, IReadOnlyList<double> logs)
    {
        double Factor(FitTargets target)
        {
            var index = Array.IndexOf(wanted, target);
            return index < 0 ? 1 : Math.Exp(Math.Clamp(logs[index], -4, 4));
        }

        var rated = Factor(FitTargets.UnitRating) is var rating && rating == 1 ? unit : unit.Scaled(rating);
        var capacitance = Factor(FitTargets.Capacitance);
        var moved = capacitance == 1 ? rated : rated switch
        {
            RectifierUnit rectifier => rectifier.WithCapacitance(capacitance),
            SwitchModeUnit switchMode => switchMode.WithCapacitance(capacitance),
            _ => rated,
        };
        var (watts, coil) = (Factor(FitTargets.LampWatts), Factor(FitTargets.CoilFactor));
        var lamps = bank.With([.. bank.Lamps.Select(lamp => lamp.Filament is { } filament
            ? lamp.With(filament with { Watts = filament.Watts * watts, CoilFactor = filament.CoilFactor * coil })
            : lamp)]);
        return (moved, lamps);
    }

    private static double[] Simulate(
        Mains mains, Bank bank, Unit unit, IReadOnlyList<SwitchOnReading> readings, double windowSeconds, double seconds, double phaseDegrees)
    {
        var simulation = new CircuitSimulation(mains, bank, unit, phaseDegrees);
        var count = (int)Math.Round(seconds / simulation.StepSeconds) + 1;

        // Running integral of the square: any window is a difference of two of its values.
        var integral = new double[count + 1];
        var before = simulation.LineAmps * simulation.LineAmps;
        for (var step = 1; step <= count; step++)
        {
            simulation.Step();
            var now = simulation.LineAmps * simulation.LineAmps;
            integral[step] = integral[step - 1] + 0.5 * (before + now) * simulation.StepSeconds;
            before = now;
        }

        double Until(double time) => integral[Math.Clamp((int)Math.Round(time / simulation.StepSeconds), 0, count)];
        return [.. readings.Select(reading =>
        {
            var end = Math.Min(reading.Seconds, seconds);
            return Math.Sqrt((Until(end) - Until(end - windowSeconds)) / windowSeconds);
        })];
    }
}
