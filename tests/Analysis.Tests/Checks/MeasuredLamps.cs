using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Checks;

/// <summary>
/// Measured current-voltage curves of three lamps: public readings of student laboratories, taken as 1 to 2 % a point. They reach down to 2 %
/// of rated volts, which no handbook table does. Only the scale (the lamp's true watts), the one loss share that the fill has and, where the
/// rating is not known, the temperature are fitted.
/// </summary>
public sealed record MeasuredLamp(string Name, LampFill Fill, double Watts, double Volts, double[] At, double[] Amps, bool HotKnown = true)
{
    // A: gas-filled lamp of nominally 150 W 220 V; V x I curve in a public teaching repository (Portuguese).
    public static MeasuredLamp A { get; } = new(
        "A", LampFill.Gas, 156.2, 220,
        [20, 40, 60, 80, 100, 120, 140, 160, 180, 200, 220],
        [0.18, 0.26, 0.33, 0.39, 0.45, 0.51, 0.55, 0.59, 0.63, 0.67, 0.71]);

    // B: vacuum lamp of about 15 W 230 V; public university practical course, data file Wolframfaden.csv.
    public static MeasuredLamp B { get; } = new(
        "B", LampFill.Vacuum, 15.9, 230,
        [4, 8, 12, 16, 20, 24, 28, 32, 36, 40, 48, 56, 64, 72, 80],
        [5.84e-3, 9.00e-3, 11.57e-3, 13.83e-3, 15.94e-3, 17.83e-3, 19.63e-3, 21.3e-3, 22.9e-3, 24.4e-3, 27.3e-3, 30.1e-3, 32.6e-3, 35.1e-3, 37.4e-3]);

    // C: small pilot lamp of about 6 V; public university practical course, data file tensaoxcorrente-lampada.csv. Neither its
    // rating nor its temperature is known, and a filament so short loses much along its leads: both are fitted.
    public static MeasuredLamp C { get; } = new(
        "C", LampFill.Vacuum, 0.34, 5.53,
        [0.1, 0.76, 1.10, 1.61, 1.81, 2.27, 3.14, 3.67, 3.77, 4.12, 4.51, 4.85, 5.14, 5.37, 5.53],
        [8.2e-3, 20.5e-3, 24.8e-3, 30.5e-3, 32.8e-3, 37.1e-3, 44.5e-3, 48.1e-3, 49.3e-3, 51.8e-3, 54.4e-3, 56.8e-3, 58.6e-3, 60.1e-3, 61.1e-3], HotKnown: false);

    /// <summary>All three.</summary>
    public static IReadOnlyList<MeasuredLamp> All => [A, B, C];

    public (double Rms, double Share, double Kelvin) BestFit()
    {
        var gas = Fill == LampFill.Gas;
        var assumed = gas ? 2790 + 250 * Math.Log10(Watts / Volts / 0.8) : 2450 + 150 * Math.Log10(Watts / 25);
        double[] kelvins = HotKnown ? [assumed] : [.. Enumerable.Range(0, 15).Select(step => 1700.0 + 50 * step)];
        return Enumerable.Range(0, 101)
            .Select(step => step * (gas || !HotKnown ? 0.002 : 0.0005))
            .SelectMany(share => kelvins, (share, kelvin) => (Rms: Residual(share, kelvin), Share: share, Kelvin: kelvin))
            .MinBy(fit => fit.Rms);
    }

    private double Residual(double share, double kelvin)
    {
        var gas = Fill == LampFill.Gas;
        var filament = new Filament(Watts, Volts, kelvin, gas ? share : 0, gas ? 0.01 : share, 0.65, Lamp.RoomKelvin);
        var curve = new FilamentCurve(filament);

        // Watts scale the current: the best scale is the mean ratio.
        var ratios = At.Select((volts, index) => Math.Log(Amps[index] / curve.Amps(volts, out _))).ToArray();
        var mean = ratios.Average();
        return Math.Sqrt(ratios.Average(ratio => (ratio - mean) * (ratio - mean)));
    }
}
