using static System.FormattableString;

namespace Lampwarden.Analysis.Watching;

/// <summary>The sentences a finding speaks: what is seen, what is likeliest, what to look at first. All texts live here.</summary>
internal static class Advice
{
    public const string Overload =
        "The meter reports a current beyond its range, which a short or a range set too low would both do: look at the lamps first, and if they are dark, choose a higher range.";

    /// <summary>What this watch will not see, told before the run.</summary>
    public static string[] Limits(WatchSettings settings)
    {
        List<string> notes = [];
        if (!settings.MainsMeasured)
        {
            notes.Add("The mains is not measured: a creep is found 3 to 5 times later than with a mains reading, one of half a per cent an hour often not within a shift, a step under 20 % only after a minute and a half, and one under 2 % never.");
        }

        if (settings.Expectation is null)
        {
            notes.Add("There is no prediction to hold the current against: a fault that is there at switch-on will be taken for the unit's own way.");
        }

        if (settings.Meter.AcCoupled)
        {
            notes.Add("The meter is AC-coupled: behind a half-wave fault it reads about a quarter low, so a short through a diode may look healthy.");
        }

        return [.. notes];
    }

    public static string Silent(double seconds) =>
        Invariant($"No reading has come for {seconds:0.#} s, so nothing is being watched: look at the meter, its battery, its auto-power-off and its cable.");

    public static string Shorted(double amps, double shortedAmps) => Invariant(
        $"The line draws {Amps(amps)}, which is what the bank passes into a short ({Amps(shortedAmps)}): switch off and look for a short across the unit's input, its rectifier or its first capacitor.");

    public static string StepUp(double percent, double amps) => Invariant(
        $"The current jumped by {percent:0.#} % to {Amps(amps)} and stayed there: most likely a part of the unit has shorted; switch off and look for what has become hot.");

    public static string StepDown(double percent, double amps) => Invariant(
        $"The current fell by {percent:0.#} % to {Amps(amps)} and stayed there, with the mains unmoved: look whether a lamp of the bank has gone dark, then at the unit.");

    /// <summary>A step with its explanation.</summary>
    public static string Step(double change, double amps, string why, string first) => Invariant(
        $"The current {(change > 0 ? "jumped" : "fell")} by {Math.Abs(Math.Exp(change) - 1) * 100:0.#} % to {Amps(amps)} and stayed there: {why}; {first}.");

    public static string LookFirst(Cause cause) => cause switch
    {
        Cause.UnitTakesMore => "switch off and look for what has become hot",
        Cause.UnitTakesLess => "look which part of the unit has stopped working",
        Cause.CircuitOpened => "look at the unit's fuse, the lamps and the leads, and do not trust the unit to be dead",
        Cause.LampDark => "look at the bank first and replace the lamp with power off",
        Cause.LampLit => "nothing to do if that was meant; the prediction has been moved along",
        Cause.MainsMoved => "measure the mains to be sure",
        Cause.MeterScale => "look at the meter's range",
        _ => "if so, tell the watch next time before the change",
    };

    public static string Open(double amps) => Invariant(
        $"The current fell to {Amps(amps)}: the circuit has opened; look at the unit's fuse, the lamps and the leads, and do not trust the unit to be dead.");

    public const string DipUnmeasured =
        "The current left its level and came back within a minute and a half, as a dip of the mains would make it: nothing to do, but measure the mains to be sure.";

    public static string Mains(double percent) => Invariant(
        $"The mains moved by {percent:+0.#;-0.#} %: no fault of the unit, but if it comes again and again look at what else hangs on this line.");

    public static string SlowInrush(double seconds, double predicted) => Invariant(
        $"After switch-on the current took {seconds:0} s to come down, where {predicted:0.##} s were predicted: a start-up that hesitates, such as a reservoir drawn down by a leak or a motor that turns hard; listen and feel before going on.");

    public static string Stuck(double amps, double seconds) => Invariant(
        $"The meter has shown exactly {Amps(amps)} for {seconds:0} s, longer than its own noise allows: it hangs or is on hold; look at its display and press hold, and trust no silence of the watch until it moves.");

    public static string Cycling(double periodSeconds) => double.IsNaN(periodSeconds)
        ? "The unit drops out and starts again: either the bank is too small for it, or its protection trips; try one more lamp in parallel before suspecting the unit."
        : Invariant($"The unit drops out and starts again every {periodSeconds:0.0} s: either the bank is too small for it, or its protection trips; try one more lamp in parallel before suspecting the unit.");

    public static string CyclesItself(bool healthy, double periodSeconds) => healthy
        ? Invariant($"The unit switches by itself between two levels, every {Span(periodSeconds)} or so: taken as its own way from now on; if it has no thermostat or compressor, look why it does.")
        : Invariant($"The unit has begun to switch by itself between two levels, every {Span(periodSeconds)} or so: if it has no thermostat or compressor its protection trips; look for heat and for a loose joint.");

    public static string Overdue(bool away, double amps) => Invariant(
        $"The unit used to switch between two levels and has now stayed on the {(away ? "second" : "first")} ({Amps(amps)}) for much longer than ever: a thermostat or a contact may hang; look whether it gets too hot.");

    public static string Intermittent(double amps) => Invariant(
        $"The current jumps to and fro (last {Amps(amps)}): a loose or arcing contact; switch off and look at plugs, switch, fuse holder and lamp sockets for scorching.");

    public static string Developing(double percent, double percentPerHour, double amps) => Invariant(
        $"The current has risen {percent:0.#} % above what this unit should draw, to {Amps(amps)}{(double.IsNaN(percentPerHour) ? "" : $", and climbs {Pace(percentPerHour)}")}: a short is likely developing; look for a part that runs hot, and be ready to switch off.");

    private static string Pace(double percentPerHour) => percentPerHour > 120
        ? Invariant($"{percentPerHour / 60:0.#} % a minute")
        : Invariant($"{percentPerHour:0.#} % an hour");

    /// <summary>A slow rise with its forecast.</summary>
    public static string Rising(Signature signature, double percent, double percentPerHour, double amps, double warningAmps, Forecast forecast)
    {
        var pace = signature switch
        {
            Signature.Runaway => Invariant($"and rises ever faster, now {Pace(percentPerHour)}: something heats itself"),
            Signature.HardShort => "as if in one step: a part may have shorted in part",
            _ => Invariant($"and climbs {Pace(percentPerHour)}: a short is likely developing"),
        };
        var when = double.IsFinite(forecast.HighSeconds) && forecast.HighSeconds > 0 && signature != Signature.HardShort
            ? Invariant($"; it will reach {Amps(warningAmps)} in about {Span(forecast.MiddleSeconds)} ({Span(forecast.LowSeconds)} to {Span(forecast.HighSeconds)})")
            : "";
        return Invariant($"The current is {percent:0.#} % above what this unit should draw, at {Amps(amps)}, {pace}{when}; look for a part that runs hot, and be ready to switch off.");
    }

    private static string Span(double seconds) =>
        seconds < 90 ? Invariant($"{seconds:0} s") : seconds < 5400 ? Invariant($"{seconds / 60:0} min") : Invariant($"{seconds / 3600:0.#} h");

    public static string FallingSlowly(double percent, double amps) => Invariant(
        $"The current has sunk {percent:0.#} % below what was expected, to {Amps(amps)}: often a long warm-up, else a part that fades; compare with the prediction before the unit goes back.");

    public static string AboveBand(double amps, double low, double high) => Invariant(
        $"The current settled at {Amps(amps)}, above the predicted band of {Amps(low)} to {Amps(high)}: the unit takes more than its nameplate says, or the bank is not the one described; look for a partial short before leaving it.");

    public static string BelowBand(double amps, double low, double high) => Invariant(
        $"The current settled at {Amps(amps)}, below the predicted band of {Amps(low)} to {Amps(high)}: part of the unit may not have started, or a lamp is dark, or the bank is not the one described.");

    public static string Amps(double amps) =>
        Math.Abs(amps) < 0.9995 ? Invariant($"{amps * 1000:0} mA") : Invariant($"{amps:0.00} A");
}
