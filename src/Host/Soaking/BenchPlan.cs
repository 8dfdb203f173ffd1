using System.Globalization;
using Lampwarden.Acquisition;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Reporting;

namespace Lampwarden.Host.Soaking;

/// <summary>A bench made ready: texts read, current predicted, the watch told what to expect.</summary>
public sealed class BenchPlan
{
    private BenchPlan(BenchOptions options, Mains mains, Bank bank, Unit unit, BenchPrediction prediction, WatchSettings settings) =>
        (Options, Mains, Bank, Unit, Prediction, WatchSettings) = (options, mains, bank, unit, prediction, settings);

    /// <summary>The bench's name.</summary>
    public string Name => Options.Name;

    /// <summary>As configured.</summary>
    public BenchOptions Options { get; }

    /// <summary>The supply.</summary>
    public Mains Mains { get; }

    /// <summary>The limiter.</summary>
    public Bank Bank { get; }

    /// <summary>What soaks.</summary>
    public Unit Unit { get; }

    /// <summary>What should happen.</summary>
    public BenchPrediction Prediction { get; }

    /// <summary>What the watch is told.</summary>
    public WatchSettings WatchSettings { get; }

    /// <summary>The meter of the line current.</summary>
    public MeterOptions LineMeter => Options.Meters.Single(meter => meter.Quantity == Quantity.LineCurrent);

    /// <summary>The meter of the mains; null where mains is not measured.</summary>
    public MeterOptions? MainsMeter => Options.Meters.SingleOrDefault(meter => meter.Quantity == Quantity.MainsVoltage);

    /// <summary>Planned length of the run in seconds.</summary>
    public double PlannedSeconds => Options.Soak.PlannedHours * 3600;

    /// <summary>A line current above this means that mains is on: a twentieth of the least current expected, and more than a meter's idle counts.</summary>
    public double SwitchedOnAmps =>
        Math.Max(5 * LineMeter.Accuracy.CountSize, (double.IsNaN(Prediction.Steady.LineAmps) ? 0 : Prediction.Steady.LineAmps) / 20);

    /// <summary>What to expect, in one sentence for a reader.</summary>
    public string Outlook => Prediction.Steady.Exists
        ? string.Create(CultureInfo.InvariantCulture,
            $"Expected: {Narration.Amps(Prediction.Steady.LineAmps)} once settled ({Narration.Amps(Prediction.Band.LowAmps)} to {Narration.Amps(Prediction.Band.HighAmps)}), {Narration.Amps(Prediction.Shorted.LineAmps)} with the unit shorted.")
        : $"This bank cannot carry this unit: {Prediction.Steady.Note}";

    /// <summary>What the watch will not see well on this bench, and what that costs; empty where there is nothing to say.</summary>
    public IReadOnlyList<string> WatchNotes => new Watch(WatchSettings).Notes;

    /// <summary>Makes a bench ready.</summary>
    /// <param name="options">A bench that has passed the rules.</param>
    /// <param name="inventory">The lamps its bank text may name.</param>
    /// <exception cref="FormatException">A text cannot be read.</exception>
    public static BenchPlan From(BenchOptions options, LampInventory inventory)
    {
        var mains = Mains.Parse(options.Mains);
        var bank = Bank.Parse(options.Bank, mains, inventory);
        var unit = Unit.Parse(options.Unit, mains);
        var line = options.Meters.Single(meter => meter.Quantity == Quantity.LineCurrent);
        var mainsMeter = options.Meters.SingleOrDefault(meter => meter.Quantity == Quantity.MainsVoltage);
        var assumed = new PredictionSettings { Meter = Predicted(line), WithIntervals = false };
        var prediction = Predictor.Predict(mains, bank, unit, mainsMeter is null ? assumed : assumed with { MainsUncertainty = MeasuredMainsUncertainty });
        var settings = new WatchSettings
        {
            ReadingsPerSecond = Math.Clamp(line.ReadingsPerSecond, 0.2, 100),
            NominalMainsVolts = mains.Volts,
            MainsMeasured = mainsMeter is not null,
            MainsReadingsPerSecond = mainsMeter?.ReadingsPerSecond,
            PlannedHours = options.Soak.PlannedHours,
            Acceptance = new AcceptanceLimits(options.Soak.Acceptance.SteadyWithinPercent, 1 - options.Soak.Acceptance.GapsAtMostPercent / 100),
            Meter = new MeterTraits(line.WindowSeconds, line.Accuracy.PercentOfReading, line.Accuracy.Counts, line.Accuracy.CountSize, line.Coupling == "ac"),
            Expectation = ExpectationOf(mains, bank, unit, prediction, options.Soak.ExpectedAmps),
        };
        return new BenchPlan(options, mains, bank, unit, prediction, settings);
    }

    /// <summary>The same bench, its unit held to the reference of its model.</summary>
    /// <param name="band">Null leaves everything as it is.</param>
    public BenchPlan HeldTo(ReferenceBand? band) => band is null || WatchSettings.Expectation is not { } expected
        ? this
        : new BenchPlan(Options, Mains, Bank, Unit, Prediction, WatchSettings with
        {
            Expectation = expected with { SteadyAmps = band.SteadyAmps, BandLowAmps = band.LowAmps, BandHighAmps = band.HighAmps },
        });

    /// <summary>A configured meter in the words of prediction.</summary>
    public static PredictedMeter Predicted(MeterOptions meter) => new()
    {
        WindowSeconds = meter.WindowSeconds,
        Coupling = meter.Coupling == "ac" ? MeterCoupling.Ac : MeterCoupling.AcDc,
        Response = meter.Response switch
        {
            "firstOrder" => MeterResponse.FirstOrder,
            "meanResponding" => MeterResponse.MeanResponding,
            _ => MeterResponse.TrueRms,
        },
        PercentOfReading = meter.Accuracy.PercentOfReading,
        Counts = meter.Accuracy.Counts,
        CountSize = meter.Accuracy.CountSize,
    };

    private static Expectation? ExpectationOf(Mains mains, Bank bank, Unit unit, BenchPrediction prediction, double? expectedAmps)
    {
        if (!prediction.Steady.Exists && expectedAmps is null)
        {
            // Nothing steady can be promised: the watch goes by what it sees.
            return null;
        }

        var steady = expectedAmps ?? prediction.Steady.LineAmps;
        return new Expectation
        {
            SteadyAmps = steady,
            // A user who names the current means that one, within what the prediction calls its own spread.
            BandLowAmps = prediction.Band.LowAmps * steady / prediction.Steady.LineAmps,
            BandHighAmps = prediction.Band.HighAmps * steady / prediction.Steady.LineAmps,
            ShortedAmps = prediction.Shorted.LineAmps,
            FirstReadingAmps = prediction.Inrush.FirstReadingAmps,
            SettleSeconds = prediction.Inrush.SettleSeconds,
            MainsExponent = MainsExponent(mains, bank, unit),
            BankExponent = MainsExponent(mains, bank, ResistorUnit.Short),
            Lamps = [.. Enumerable.Range(0, bank.Lamps.Count).Select(index => Without(mains, bank, unit, index))],
        };
    }

    private const double SettledSeconds = 60;

    // Relative, one sigma. The mains still wanders between the moment of prediction and the reading.
    private const double MeasuredMainsUncertainty = 0.01;

    private static double MainsExponent(Mains mains, Bank bank, Unit unit)
    {
        const double Step = 0.01;
        var above = SteadyAmps(mains with { Volts = mains.Volts * (1 + Step) }, bank, unit);
        var below = SteadyAmps(mains with { Volts = mains.Volts * (1 - Step) }, bank, unit);
        return Math.Log(above / below) / Math.Log((1 + Step) / (1 - Step));
    }

    private static ExpectedLamp Without(Mains mains, Bank bank, Unit unit, int dark)
    {
        // 10 megohms in a lamp's place is as good as none: below a thousandth of any bank's current.
        var lamps = bank.Lamps.Select((lamp, index) => index == dark ? Lamp.PlainResistor(lamp.Name, 1e7) : lamp).ToList();
        return new ExpectedLamp(bank.Lamps[dark].Name, SteadyAmps(mains, bank.With(lamps), unit));
    }

    private static double SteadyAmps(Mains mains, Bank bank, Unit unit) => new CircuitSimulation(mains, bank, unit).Coast(SettledSeconds);
}
