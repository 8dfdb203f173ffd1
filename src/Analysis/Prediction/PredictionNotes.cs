using System.Globalization;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

/// <summary>What a reader must know beside the numbers, in plain sentences.</summary>
internal static class PredictionNotes
{
    // Beyond this share of direct current in the true RMS an AC-coupled meter misleads.
    private const double DirectShare = 0.05;

    /// <summary>A constant-power unit that runs: how near it is to dropping out, and where it would sag to.</summary>
    public static string Running(ConstantPowerSolver solver, double volts, double shortedAmps, double converterWatts)
    {
        var (limit, atLimit, sagging) = solver.Fold(volts);
        var sag = sagging.Amps > 0 ? $" A second, unstable operating point lies at {Amps(sagging.Amps)} and {sagging.Volts:0} V." : "";
        return Text(
            $"Constant power: this bank carries at most {limit:0.#} W into such a unit ({limit / (volts * shortedAmps):0.00} of the shorted volt-amperes), reached at {Amps(atLimit.Amps)}; the unit takes {converterWatts:0.#} W, so it runs and is stable.{sag}");
    }

    /// <summary>A constant-power unit that cannot run, and what happens instead.</summary>
    public static string Dropping(ConstantPowerSolver solver, double volts, double shortedAmps, SwitchModeUnit unit, Hiccup hiccup)
    {
        var (limit, _, _) = solver.Fold(volts);
        var reason = limit > unit.ConverterWatts
            ? Text($"The bank could carry the {unit.ConverterWatts:0.#} W, but only below the {unit.StopVolts:0} V at which the unit stops.")
            : Text($"The bank carries at most {limit:0.#} W into such a unit ({limit / (volts * shortedAmps):0.00} of the shorted volt-amperes), and it takes {unit.ConverterWatts:0.#} W.");
        if (hiccup.StartsPerSecond < 0.1)
        {
            return reason + (hiccup.OnShare < 0.5
                ? Text($" It does not start at all: the meter shows {Amps(hiccup.LineAmps)}.")
                : Text($" In the simulation from a cold start it stays on at {Amps(hiccup.LineAmps)}, at the very edge; take a bigger bank."));
        }

        return reason + Text(
            $" It will start and stop about {hiccup.StartsPerSecond:0.#} times a second, on {100 * hiccup.OnShare:0} % of the time, the meter near {Amps(hiccup.LineAmps)}: a pulsing unit at a steady half-load current means a bank too small, not a fault. Take a bigger bank.");
    }

    /// <summary>A motor that the bank cannot turn.</summary>
    public static string Locked(double amps) => Text(
        $"The motor does not get going behind this bank: it stands and hums at {Amps(amps)}. Leave it so for seconds only, and take a bigger bank.");

    /// <summary>A current that an AC-coupled or mean-responding meter shows wrongly.</summary>
    public static string? MeterMisled(in UnitPoint point, PredictedMeter meter, double healthyLikeWatts)
    {
        var shown = MeterView.SettledShare(point, meter) * point.Amps;
        var direct = point.DirectAmps / point.Amps;
        if (meter.Coupling == MeterCoupling.Ac && direct > DirectShare)
        {
            return Text(
                $"The current has a direct part of {Amps(point.DirectAmps)} that an AC-coupled meter does not see: it shows {Amps(shown)} of a true {Amps(point.Amps)}, and so looks like a healthy load of about {healthyLikeWatts:0} W. Set the meter to AC+DC, or measure AC and DC and join them as the root of the squares.");
        }

        return meter.Response == MeterResponse.MeanResponding && Math.Abs(shown / point.Amps - 1) > DirectShare
            ? Text($"A mean-responding meter shows {Amps(shown)} of this waveform's true {Amps(point.Amps)}: take a true-RMS meter.")
            : null;
    }

    private static string Amps(double amps) => amps < 1
        ? string.Create(CultureInfo.InvariantCulture, $"{1000 * amps:0} mA")
        : string.Create(CultureInfo.InvariantCulture, $"{amps:0.00} A");

    private static string Text(FormattableString text) => FormattableString.Invariant(text);
}
