using static System.FormattableString;

namespace Lampwarden.Analysis.Watching;

/// <summary>The sentences a finding speaks: what is seen, what is likeliest, what to look at first. All texts live here.</summary>
internal static class Advice
{
    public const string Overload =
        "The meter reports a current beyond its range, which a short or a range set too low would both do: look at the lamps first, and if they are dark, choose a higher range.";

    public static string Silent(double seconds) =>
        Invariant($"No reading has come for {seconds:0.#} s, so nothing is being watched: look at the meter, its battery, its auto-power-off and its cable.");

    public static string Shorted(double amps, double shortedAmps) => Invariant(
        $"The line draws {Amps(amps)}, which is what the bank passes into a short ({Amps(shortedAmps)}): switch off and look for a short across the unit's input, its rectifier or its first capacitor.");

    public static string StepUp(double percent, double amps) => Invariant(
        $"The current jumped by {percent:0.#} % to {Amps(amps)} and stayed there: most likely a part of the unit has shorted; switch off and look for what has become hot.");

    public static string StepDown(double percent, double amps) => Invariant(
        $"The current fell by {percent:0.#} % to {Amps(amps)} and stayed there, with the mains unmoved: look whether a lamp of the bank has gone dark, then at the unit.");

    public static string Open(double amps) => Invariant(
        $"The current fell to {Amps(amps)}: the circuit has opened; look at the unit's fuse, the lamps and the leads, and do not trust the unit to be dead.");

    public const string DipUnmeasured =
        "The current left its level and came back within a minute and a half, as a dip of the mains would make it: nothing to do, but measure the mains to be sure.";

    public static string Mains(double percent) => Invariant(
        $"The mains moved by {percent:+0.#;-0.#} %: no fault of the unit, but if it comes again and again look at what else hangs on this line.");

    public static string Cycling(double periodSeconds) => double.IsNaN(periodSeconds)
        ? "The unit drops out and starts again: either the bank is too small for it, or its protection trips; try one more lamp in parallel before suspecting the unit."
        : Invariant($"The unit drops out and starts again every {periodSeconds:0.0} s: either the bank is too small for it, or its protection trips; try one more lamp in parallel before suspecting the unit.");

    public static string Intermittent(double amps) => Invariant(
        $"The current jumps to and fro (last {Amps(amps)}): a loose or arcing contact; switch off and look at plugs, switch, fuse holder and lamp sockets for scorching.");

    public static string Developing(double percent, double percentPerHour, double amps) => Invariant(
        $"The current has risen {percent:0.#} % above what this unit should draw, to {Amps(amps)}{(double.IsNaN(percentPerHour) ? "" : Invariant($", and climbs {percentPerHour:0.#} % an hour"))}: a short is likely developing; look for a part that runs hot, and be ready to switch off.");

    public static string FallingSlowly(double percent, double amps) => Invariant(
        $"The current has sunk {percent:0.#} % below what was expected, to {Amps(amps)}: often a long warm-up, else a part that fades; compare with the prediction before the unit goes back.");

    public static string AboveBand(double amps, double low, double high) => Invariant(
        $"The current settled at {Amps(amps)}, above the predicted band of {Amps(low)} to {Amps(high)}: the unit takes more than its nameplate says, or the bank is not the one described; look for a partial short before leaving it.");

    public static string BelowBand(double amps, double low, double high) => Invariant(
        $"The current settled at {Amps(amps)}, below the predicted band of {Amps(low)} to {Amps(high)}: part of the unit may not have started, or a lamp is dark, or the bank is not the one described.");

    public static string Amps(double amps) =>
        Math.Abs(amps) < 0.9995 ? Invariant($"{amps * 1000:0} mA") : Invariant($"{amps:0.00} A");
}
