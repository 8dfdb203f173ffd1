using System.Globalization;
using Lampwarden.Analysis.Tungsten;
using MathNet.Numerics.RootFinding;

namespace Lampwarden.Analysis.Lamps;

public sealed partial class Lamp
{
    private const double LeastHotKelvin = 2200;
    private const double MostHotKelvin = 3100;

    // What a calibration leaves open: meter errors of the two readings, and of the ohms through the slope of temperature on the ratio.
    private const double CalibratedWattsShare = 0.01;
    private const double CalibratedHotKelvin = 40;
    private const double CalibratedGasHalfWidth = 0.015;

    /// <summary>
    /// The lamp as measured. The shorted current replaces the nameplate's watts at the measured volts; with cold ohms the filament
    /// temperature there follows from the resistance ratio; the third point sets the gas loss (lead loss in a vacuum lamp).
    /// </summary>
    /// <param name="measured">What was measured; NaN where a value was not taken. The shorted current or the cold ohms must be there.</param>
    /// <exception cref="CalibrationException">The values cannot belong to this lamp; the message names the likely causes.</exception>
    public Lamp Calibrated(LampCalibration measured)
    {
        if (Filament is not { } filament)
        {
            throw new CalibrationException(Name, $"Lamp '{Name}' is a plain resistor; there is no filament to calibrate.");
        }

        var shorted = !double.IsNaN(measured.ShortedAmps);
        if (shorted)
        {
            Require(measured.ShortedAmps > 0 && measured.ShortedVolts > 0, $"shorted current {measured.ShortedAmps} A at {measured.ShortedVolts} V", "both above zero");
            var expected = new FilamentCurve(filament).Amps(measured.ShortedVolts, out _);
            var ratio = measured.ShortedAmps / expected;
            Require(
                ratio is >= 0.7 and <= 1.4,
                $"shorted current {measured.ShortedAmps:0.###} A at {measured.ShortedVolts:0.#} V",
                $"near {expected:0.###} A for {RatedWatts:0.#} W {RatedVolts:0.#} V: wrong watts or rated volts entered, or another lamp in the circuit");
            filament = filament with { Volts = measured.ShortedVolts, Watts = measured.ShortedVolts * measured.ShortedAmps, HotKelvin = HotKelvinAt(filament, measured.ShortedVolts) };
        }

        var cold = !double.IsNaN(measured.ColdOhms);
        if (cold)
        {
            filament = filament with { HotKelvin = HotKelvinOfRatio(filament, measured) };
        }

        var third = !double.IsNaN(measured.DimAmps);
        if (third)
        {
            filament = WithDimPoint(filament, measured);
        }

        var tolerance = Tolerance with
        {
            WattsShare = shorted ? CalibratedWattsShare : Tolerance.WattsShare,
            HotKelvin = cold ? CalibratedHotKelvin : Tolerance.HotKelvin,
        };
        if (third && Fill == LampFill.Gas)
        {
            tolerance = tolerance with { GasLow = Math.Max(0, filament.GasShare - CalibratedGasHalfWidth), GasHigh = filament.GasShare + CalibratedGasHalfWidth };
        }
        else if (third)
        {
            tolerance = tolerance with { LeadLow = Math.Max(0, filament.LeadShare - 0.002), LeadHigh = filament.LeadShare + 0.002 };
        }

        return With(filament, tolerance);
    }

    // Without cold ohms: the assumed temperature at rated volts, carried along the lamp's own curve to the measured volts.
    private static double HotKelvinAt(Filament filament, double volts) => new FilamentCurve(filament).Kelvin(volts);

    private double HotKelvinOfRatio(Filament filament, LampCalibration measured)
    {
        var roomKelvin = measured.RoomCelsius + 273.15;
        Require(roomKelvin is >= 263 and <= 323, $"room temperature {measured.RoomCelsius:0.#} C", "-10 to 50 C");
        Require(measured.ColdOhms > 0, $"cold resistance {measured.ColdOhms} ohm", "above zero");

        // q = R hot over R at 300 K; the measured cold resistance is at the room's temperature.
        var ratio = filament.HotOhms / measured.ColdOhms * TungstenProperties.ResistanceRatio(roomKelvin);
        var kelvin = ratio is > 0.7 and < 21 ? TungstenProperties.KelvinOfRatio(ratio) : double.NaN;
        Require(
            kelvin is >= LeastHotKelvin and <= MostHotKelvin,
            string.Create(
                CultureInfo.InvariantCulture,
                $"hot over cold resistance {filament.HotOhms / measured.ColdOhms:0.0} ({filament.HotOhms:0.#} ohm at {filament.Volts:0.#} V, {measured.ColdOhms:0.##} ohm at {measured.RoomCelsius:0.#} C), a filament of {(double.IsNaN(kelvin) ? "no possible temperature" : $"{kelvin:0} K")}"),
            $"{LeastHotKelvin:0} to {MostHotKelvin:0} K. "
            + (kelvin < LeastHotKelvin || ratio < 10
                ? "Cold ohms too high: resistance of leads or a bad contact not taken off, the lamp still warm (ten minutes off), or the wrong lamp entered"
                : "Cold ohms too low: something in parallel with the lamp, the meter's lead zero subtracted twice, or the wrong lamp entered"));
        return kelvin;
    }

    private Filament WithDimPoint(Filament filament, LampCalibration measured)
    {
        Require(
            measured.DimVolts > 0.01 * filament.Volts && measured.DimVolts < 0.6 * filament.Volts && measured.DimAmps > 0,
            $"third point {measured.DimAmps} A at {measured.DimVolts} V across the lamp",
            $"2 to 50 % of the lamp's {filament.Volts:0.#} V");
        Func<double, Filament> vary = Fill == LampFill.Gas ? share => filament with { GasShare = share } : share => filament with { LeadShare = share };
        var most = Fill == LampFill.Gas ? 0.30 : 0.08;
        double Excess(double share) => new FilamentCurve(vary(share)).Amps(measured.DimVolts, out _) / measured.DimAmps - 1;

        // More loss, more current at the dim end. A reading a little under the lossless curve is the meter's error.
        var least = Excess(0);
        if (least is > 0 and < 0.02)
        {
            return vary(0);
        }

        Require(
            least <= 0 && Excess(most) >= 0,
            $"third point {measured.DimAmps:0.####} A at {measured.DimVolts:0.#} V",
            string.Create(
                CultureInfo.InvariantCulture,
                $"{measured.DimAmps * (1 + least):0.####} to {measured.DimAmps * (1 + Excess(most)):0.####} A: volts read across the unit and not across the lamp, or the wrong fill entered"));
        return vary(Brent.FindRoot(Excess, 0, most, 1e-6, 100));
    }

    private void Require(bool good, FormattableString found, FormattableString expected) =>
        Require(good, FormattableString.Invariant(found), FormattableString.Invariant(expected));

    private void Require(bool good, string found, string expected)
    {
        if (!good)
        {
            throw new CalibrationException(Name, $"Calibration of lamp '{Name}' refused: {found}; expected {expected}.");
        }
    }

    private void Require(bool good, FormattableString found, string expected) => Require(good, FormattableString.Invariant(found), expected);

    private void Require(bool good, string found, FormattableString expected) => Require(good, found, FormattableString.Invariant(expected));
}
