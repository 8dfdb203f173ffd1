namespace Lampwarden.Analysis.Choosing;

/// <summary>What <c>choose --json</c> prints: names are contract.</summary>
/// <param name="Choices">Best first.</param>
/// <param name="BringUp">From timid to bold.</param>
/// <param name="Considered">How many different banks were worked out.</param>
/// <param name="Notes">What a reader must know beside the table.</param>
public sealed record BankChoices(
    IReadOnlyList<BankChoice> Choices, IReadOnlyList<BringUpAdvice> BringUp, int Considered, IReadOnlyList<string> Notes);

/// <summary>One bank, judged for one unit.</summary>
/// <param name="Bank">Circuit notation.</param>
/// <param name="LineAmps">Healthy line current, RMS; NaN where the unit does not run.</param>
/// <param name="UnitVolts">The unit keeps.</param>
/// <param name="UnitVoltsShare">The same over mains, 0 to 1.</param>
/// <param name="ShortedAmps">A shorted unit draws.</param>
/// <param name="Contrast">Shorted over healthy current.</param>
/// <param name="Exists">False where the unit does not run behind this bank.</param>
/// <param name="Verdict">fits, starves, hides-short, lets-through or cannot-run.</param>
/// <param name="Reason">One sentence.</param>
public sealed record BankChoice(
    string Bank,
    double LineAmps,
    double UnitVolts,
    double UnitVoltsShare,
    double ShortedAmps,
    double Contrast,
    bool Exists,
    string Verdict,
    string Reason);

/// <summary>One step of a bring-up.</summary>
/// <param name="Bank">Circuit notation.</param>
/// <param name="ExpectLowAmps">A healthy unit shows at least this once settled.</param>
/// <param name="ExpectHighAmps">And at most this.</param>
/// <param name="StopAboveAmps">Switch off if the settled meter shows more.</param>
/// <param name="Why">One sentence.</param>
public sealed record BringUpAdvice(string Bank, double ExpectLowAmps, double ExpectHighAmps, double StopAboveAmps, string Why)
{
    /// <summary>Below this contrast lamps and mains of a few percent off make health and a short look alike: no step of a bring-up.</summary>
    public const double LeastContrast = 1.2;

    /// <summary>Midway between health and a dead short, in ratios; where the two touch, just above health.</summary>
    /// <param name="highAmps">Upper end of what a healthy unit shows.</param>
    /// <param name="shortedAmps">What a shorted unit draws.</param>
    public static double StopAbove(double highAmps, double shortedAmps) => Math.Sqrt(highAmps * Math.Max(shortedAmps, 1.05 * highAmps));
}
