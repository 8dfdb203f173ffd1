namespace Lampwarden.Acquisition.Protocol;

/// <summary>What a meter's text says: a number in SI, an overload, or nothing usable with the reason.</summary>
/// <param name="Kind">Which of the three.</param>
/// <param name="Value">The number in A or V; NaN when there is none.</param>
/// <param name="Digits">Decimal places of the number as sent, in SI; -1 when there is none.</param>
/// <param name="Reason">Why there is no number.</param>
/// <param name="Detail">What was seen and what was expected; null for a number.</param>
public readonly record struct MeterValue(MeterEventKind Kind, double Value, int Digits, GapReason Reason, string? Detail)
{
    /// <summary>A number.</summary>
    public static MeterValue Number(double value, int digits) => new(MeterEventKind.Reading, value, digits, GapReason.None, null);

    /// <summary>Beyond the meter's range.</summary>
    public static MeterValue Overload(string detail) => new(MeterEventKind.Overload, double.NaN, -1, GapReason.None, detail);

    /// <summary>Nothing usable.</summary>
    public static MeterValue Refused(GapReason reason, string detail) => new(MeterEventKind.Gap, double.NaN, -1, reason, detail);
}
