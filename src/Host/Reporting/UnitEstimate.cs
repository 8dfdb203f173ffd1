using Lampwarden.Acquisition;
using Lampwarden.Analysis.Inference;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Units;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Recording.Exchange;
using Lampwarden.Host.Soaking;

namespace Lampwarden.Host.Reporting;

/// <summary>
/// The unit's own volts and watts, worked back from the line current through the bank. By the unit's model where its kind is
/// known and lets through that current; from the current alone otherwise, which for peaky or shifted currents gives bounds only.
/// </summary>
internal sealed class UnitEstimate
{
    private readonly Mains _mains;
    private readonly Bank _bank;
    private readonly Unit _unit;
    private readonly Analysis.Prediction.PredictedMeter _meter;
    private readonly Lazy<ModelInference> _byModel;
    private readonly Lazy<UnitInference> _byCurrent;

    private UnitEstimate(Mains mains, Bank bank, Unit unit, BenchOptions? bench)
    {
        (_mains, _bank, _unit) = (mains, bank, unit);
        var line = bench?.Meters.FirstOrDefault(meter => meter.Quantity == Quantity.LineCurrent);
        _meter = line is null ? new Analysis.Prediction.PredictedMeter() : BenchPlan.Predicted(line);
        _byModel = new(() => new ModelInference(_mains, _bank, _unit, _meter));
        _byCurrent = new(() => new UnitInference(_mains, _bank, _meter));
    }

    /// <summary>For a bench as it stands. Not thread-safe.</summary>
    public static UnitEstimate For(BenchPlan plan) => new(plan.Mains, plan.Bank, plan.Unit, plan.Options);

    /// <summary>For a run; null with the reason where its texts do not say enough.</summary>
    public static (UnitEstimate? Estimate, string? WhyNot) For(RunRecord record)
    {
        try
        {
            var mains = Mains.Parse(record.Info.Mains);
            var bench = StoredSeries.BenchOf(record);
            return (new UnitEstimate(mains, Bank.Parse(record.Info.Bank, mains, Inventory.Of(bench?.Inventory ?? [])), Unit.Parse(record.Info.Unit, mains), bench), null);
        }
        catch (Exception error) when (error is FormatException or ArgumentException)
        {
            return (null, "not worked out: the record does not hold the bank's lamps or the unit's kind");
        }
    }

    /// <summary>What a settled current tells; null where there is none.</summary>
    /// <param name="mainsVolts">NaN where the mains was not measured.</param>
    public InferredUnit? At(double lineAmps, double mainsVolts)
    {
        if (!(lineAmps > 0 && double.IsFinite(lineAmps)))
        {
            return null;
        }

        var nature = Nature(_unit.Text);
        return nature != UnitNature.Resistive && _byModel.Value.TryInfer(lineAmps, mainsVolts, out var byModel, out _)
            ? byModel
            : _byCurrent.Value.Infer(lineAmps, mainsVolts, nature);
    }

    private static UnitNature Nature(string unit) => unit.Split(' ')[0] switch
    {
        "rectifier" or "switch-mode" => UnitNature.Rectifying,
        "transformer" or "motor" => UnitNature.Reactive,
        _ => UnitNature.Resistive,
    };
}
