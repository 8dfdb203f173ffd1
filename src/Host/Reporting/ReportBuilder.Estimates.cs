using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Reporting;

public static partial class ReportBuilder
{
    /// <summary>Rows for the unit's own volts and watts, worked back from the line current.</summary>
    private static IEnumerable<string[]> UnitEstimates(RunRecord record, RunFigures figures)
    {
        double Predicted(string name) => Said.Within(record.PredictionJson, "steady", name);
        yield return ["across the unit", Said.Volts(Predicted("unitVolts")), Said.Unknown, ""];
        yield return ["power of the unit", Said.Watts(Predicted("unitWatts")), Said.Unknown, ""];
    }
}
