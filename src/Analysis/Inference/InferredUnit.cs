using Lampwarden.Analysis.Uncertainty;

namespace Lampwarden.Analysis.Inference;

/// <summary>What one line current tells about the unit. A value that cannot be told is NaN; its interval may still be known.</summary>
/// <param name="BankVolts">Across the bank.</param>
/// <param name="BankVoltsInterval">95 %.</param>
/// <param name="Volts">Across the unit; NaN where only bounds are known.</param>
/// <param name="VoltsInterval">95 %, or the bounds widened by it.</param>
/// <param name="Watts">Real power of the unit.</param>
/// <param name="WattsInterval">95 %, or the bounds widened by it.</param>
/// <param name="Ohms">Volts over amperes; NaN near a short.</param>
/// <param name="OhmsInterval">95 %.</param>
/// <param name="BelowOhms">Near a short: the resistance is below this with 95 %; NaN elsewhere.</param>
/// <param name="IsIllConditioned">The current hardly depends on the unit any more: a small error of any reading is a large one of the answer.</param>
/// <param name="Note">One or two plain sentences; null where there is nothing to add.</param>
public sealed record InferredUnit(
    double BankVolts,
    Interval BankVoltsInterval,
    double Volts,
    Interval VoltsInterval,
    double Watts,
    Interval WattsInterval,
    double Ohms,
    Interval OhmsInterval,
    double BelowOhms,
    bool IsIllConditioned,
    string? Note);
