using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Uncertainty;

namespace Lampwarden.Analysis.Prediction;

/// <summary>
/// What should happen on one bench with one unit. Property names are the contract of <c>predict --json</c>; NaN stands for a number
/// that cannot be given.
/// </summary>
/// <param name="Mains">The supply.</param>
/// <param name="Bank">The limiter.</param>
/// <param name="Unit">What stands behind it.</param>
/// <param name="Steady">The healthy steady state.</param>
/// <param name="Inrush">The switch-on.</param>
/// <param name="Shorted">The same bank with its output shorted.</param>
/// <param name="Band">Where the settled meter should stay.</param>
/// <param name="Contrast">Shorted over healthy current.</param>
/// <param name="Notes">What a reader must know, a sentence or a few each.</param>
/// <param name="Intervals">95 % interval of every number, by its path in the JSON document, such as <c>steady.lineAmps</c>.</param>
public sealed record BenchPrediction(
    Mains Mains,
    BankSummary Bank,
    UnitSummary Unit,
    SteadyState Steady,
    Inrush Inrush,
    ShortedState Shorted,
    CurrentBand Band,
    double Contrast,
    IReadOnlyList<string> Notes,
    IReadOnlyDictionary<string, Interval> Intervals);

/// <summary>The limiter in short.</summary>
/// <param name="Text">Circuit notation.</param>
/// <param name="ColdOhms">Resistance of the cold bank.</param>
/// <param name="RatedWatts">Sum of the nameplates.</param>
public sealed record BankSummary(string Text, double ColdOhms, double RatedWatts);

/// <summary>The unit in short.</summary>
public sealed record UnitSummary(string Text);

/// <summary>The healthy steady state, all RMS.</summary>
/// <param name="Exists">False where the bank cannot carry the unit; then the numbers are NaN and the note says what happens instead.</param>
/// <param name="LineAmps">True RMS line current.</param>
/// <param name="BankVolts">Across the bank.</param>
/// <param name="UnitVolts">Across the unit.</param>
/// <param name="UnitWatts">Real power of the unit.</param>
/// <param name="PowerFactor">Of the unit.</param>
/// <param name="Lamps">Every lamp, in the order of the bank's text.</param>
/// <param name="Note">What a reader must know beside the numbers; null where there is nothing.</param>
public sealed record SteadyState(
    bool Exists,
    double LineAmps,
    double BankVolts,
    double UnitVolts,
    double UnitWatts,
    double PowerFactor,
    IReadOnlyList<LampState> Lamps,
    string? Note);

/// <summary>One lamp in the steady state.</summary>
/// <param name="Name">As in the bank's text.</param>
/// <param name="Volts">Across it.</param>
/// <param name="Amps">Through it.</param>
/// <param name="Watts">It takes.</param>
/// <param name="FilamentKelvin">NaN for a plain resistor.</param>
/// <param name="Glow">Share of its rated light, 0 to 1 and above.</param>
/// <param name="FirstGlowSeconds">First visible glow (798 K) after a cold switch-on; NaN for never.</param>
public sealed record LampState(
    string Name, double Volts, double Amps, double Watts, double FilamentKelvin, double Glow, double FirstGlowSeconds);

/// <summary>The switch-on of the healthy unit, at the worst switching phase, everything cold.</summary>
/// <param name="PeakAmps">Highest instantaneous current.</param>
/// <param name="FirstCycleRmsAmps">True RMS over the first mains cycle.</param>
/// <param name="SettleSeconds">From when on the RMS current of a cycle stays within 10 % of the steady one.</param>
/// <param name="FirstReadingAmps">What the meter shows first, its window beginning with the switch-on.</param>
public sealed record Inrush(double PeakAmps, double FirstCycleRmsAmps, double SettleSeconds, double FirstReadingAmps);

/// <summary>The same bank with its output shorted.</summary>
/// <param name="LineAmps">True RMS line current.</param>
/// <param name="PeakAmps">Highest instantaneous current at a cold switch-on, worst phase.</param>
/// <param name="Lamps">Every lamp, in the order of the bank's text.</param>
public sealed record ShortedState(double LineAmps, double PeakAmps, IReadOnlyList<LampState> Lamps);

/// <summary>Where the settled meter should stay.</summary>
/// <param name="LowAmps">Lower end.</param>
/// <param name="HighAmps">Upper end.</param>
/// <param name="Coverage">Probability that a healthy unit on such lamps reads inside, 0 to 1.</param>
public sealed record CurrentBand(double LowAmps, double HighAmps, double Coverage);
