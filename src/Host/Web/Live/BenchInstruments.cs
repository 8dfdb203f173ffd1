using Lampwarden.Analysis.Inference;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Reporting;
using Lampwarden.Host.Soaking;

namespace Lampwarden.Host.Web.Live;

/// <summary>
/// From one reading to volts, watts and ohms with intervals, and to glowing lamps. Not thread-safe: its bench's lock guards it.
/// </summary>
internal sealed class BenchInstruments(BenchPlan plan)
{
    // 95 % of a normal distribution.
    private const double Coverage = 1.96;

    // A reading that moved by less than this share says the same about the unit: far below any interval.
    private const double SameShare = 0.0005;

    // Of a measured mains, and of one that is only assumed: as the inference takes them.
    private const double MeasuredShare = 0.005;
    private const double AssumedShare = 0.02;

    private static readonly UnitNow NoUnit =
        new(double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN);

    private readonly BankReading _bank = new(plan.Bank);
    private readonly UnitEstimate _estimate = UnitEstimate.For(plan);
    private (double Amps, double Mains, InferredUnit? Unit) _last = (double.NaN, double.NaN, null);

    /// <summary>What the page shows for one observation.</summary>
    public NowDocument Now(string? run, in Observation seen, string? sentence)
    {
        var amps = seen.IsGap || seen.IsOverload ? double.NaN : Math.Abs(seen.LineAmps);
        var measured = double.IsFinite(seen.MainsVolts);
        var mains = measured ? seen.MainsVolts : plan.Mains.Volts;
        var sigma = mains * (measured ? MeasuredShare : AssumedShare);
        var mainsNow = new MainsNow(mains, mains - Coverage * sigma, mains + Coverage * sigma, measured);
        if (!(amps > 0))
        {
            var dark = amps == 0;
            return new NowDocument(
                plan.Name, run, seen.Seconds, sentence, amps, seen.IsOverload, mainsNow,
                dark ? new BankNow(0, 0, 0) : new BankNow(double.NaN, double.NaN, double.NaN),
                NoUnit, dark ? _bank.Lamps(0) : [], seen.IsOverload ? "The meter is over its range: more current flows than it can show." : null);
        }

        var unit = Infer(amps, seen.MainsVolts);
        return new NowDocument(
            plan.Name, run, seen.Seconds, sentence, amps, false, mainsNow,
            unit is null ? new BankNow(double.NaN, double.NaN, double.NaN) : new BankNow(unit.BankVolts, unit.BankVoltsInterval.Low, unit.BankVoltsInterval.High),
            unit is null ? NoUnit : Document(unit), _bank.Lamps(amps), unit?.Note);
    }

    private InferredUnit? Infer(double amps, double mains)
    {
        if (!Same(amps, _last.Amps) || !(Same(mains, _last.Mains) || (double.IsNaN(mains) && double.IsNaN(_last.Mains))))
        {
            _last = (amps, mains, _estimate.At(amps, mains));
        }

        return _last.Unit;
    }

    private static bool Same(double a, double b) => Math.Abs(a - b) <= SameShare * Math.Abs(b);

    private static UnitNow Document(InferredUnit unit) => unit.IsIllConditioned && double.IsFinite(unit.BelowOhms)
        ? new UnitNow(
            double.NaN, double.NaN, unit.VoltsInterval.High, double.NaN, double.NaN, unit.WattsInterval.High, double.NaN, double.NaN, unit.BelowOhms)
        : new UnitNow(
            unit.Volts, unit.VoltsInterval.Low, unit.VoltsInterval.High,
            unit.Watts, unit.WattsInterval.Low, unit.WattsInterval.High,
            unit.Ohms, unit.OhmsInterval.Low, unit.OhmsInterval.High);
}
