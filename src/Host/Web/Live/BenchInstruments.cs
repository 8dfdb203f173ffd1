using Lampwarden.Analysis.Inference;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Soaking;

namespace Lampwarden.Host.Web.Live;

/// <summary>
/// From one reading to volts, watts and ohms with intervals, and to glowing lamps. Not thread-safe: its bench's lock guards it.
/// </summary>
internal sealed class BenchInstruments(BenchPlan plan)
{
    // 95 % of a normal distribution.
    private const double Coverage = 1.96;

    // Spread of lamps known by their nameplates alone, and of a mains nobody measures: as the prediction takes them.
    private static readonly PredictionSettings Assumed = new();

    private readonly BankReading _bank = new(plan.Bank);

    /// <summary>What the page shows for one observation.</summary>
    public NowDocument Now(string? run, in Observation seen, string? sentence)
    {
        var amps = seen.IsGap || seen.IsOverload ? double.NaN : Math.Abs(seen.LineAmps);
        var measured = double.IsFinite(seen.MainsVolts);
        var mains = measured ? seen.MainsVolts : plan.Mains.Volts;
        var mainsSigma = mains * (measured ? MeterShare(plan.MainsMeter, mains) : Assumed.MainsUncertainty);
        var mainsNow = new MainsNow(mains, mains - Coverage * mainsSigma, mains + Coverage * mainsSigma, measured);
        if (double.IsNaN(amps))
        {
            return new NowDocument(
                plan.Name, run, seen.Seconds, sentence, double.NaN, seen.IsOverload, mainsNow,
                new BankNow(double.NaN, double.NaN, double.NaN), NoUnit, [], seen.IsOverload ? "The meter is over its range: more current flows than it can show." : null);
        }

        var lamps = _bank.Lamps(amps);
        var bank = _bank.Volts(amps);
        var ampsSigma = amps * MeterShare(plan.LineMeter, amps);
        // A lamp of p more watts takes about p more current at the same volts: the same as reading p less current.
        var bankSigma = _bank.SlopeOhms * Math.Sqrt(ampsSigma * ampsSigma + Square(amps * Analysis.Lamps.LampTolerance.GasNameplate.WattsShare));
        return new NowDocument(
            plan.Name, run, seen.Seconds, sentence, amps, false, mainsNow,
            new BankNow(bank, Math.Max(0, bank - Coverage * bankSigma), bank + Coverage * bankSigma),
            Unit(amps, ampsSigma, mains - bank, Math.Sqrt(mainsSigma * mainsSigma + bankSigma * bankSigma)),
            lamps,
            Note(amps));
    }

    private static readonly UnitNow NoUnit =
        new(double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN);

    // In phase with the mains: docs/model.md says where that is not true. Errors of current and volts are joined to first order.
    private static UnitNow Unit(double amps, double ampsSigma, double volts, double voltsSigma)
    {
        var (low, high) = (Math.Max(0, volts - Coverage * voltsSigma), Math.Max(0, volts + Coverage * voltsSigma));
        if (amps <= 0)
        {
            return NoUnit with { Volts = volts, LowVolts = low, HighVolts = high, Watts = 0, LowWatts = 0, HighWatts = 0 };
        }

        // Near the short the volts are lost in their own interval: then only an upper end can be given.
        if (volts < Coverage * voltsSigma)
        {
            return new UnitNow(double.NaN, double.NaN, high, double.NaN, double.NaN, high * amps, double.NaN, double.NaN, high / amps);
        }

        var share = Math.Sqrt(Square(voltsSigma / volts) + Square(ampsSigma / amps));
        var (watts, ohms) = (volts * amps, volts / amps);
        return new UnitNow(
            volts, low, high,
            watts, Math.Max(0, watts * (1 - Coverage * share)), watts * (1 + Coverage * share),
            ohms, Math.Max(0, ohms * (1 - Coverage * share)), ohms * (1 + Coverage * share));
    }

    private string? Note(double amps) =>
        amps > 0.9 * plan.Prediction.Shorted.LineAmps ? "So near the current of a dead short the current says little about the unit but that it is low in ohms." : null;

    // A maker's bound taken as a rectangle: its standard deviation is the bound over the root of three.
    private static double MeterShare(Acquisition.MeterOptions? meter, double value) => meter is null || value <= 0
        ? 0
        : (meter.Accuracy.PercentOfReading / 100 + meter.Accuracy.Counts * meter.Accuracy.CountSize / value) / Math.Sqrt(3);

    private static double Square(double value) => value * value;
}
