namespace Lampwarden.Analysis.Watching;

/// <summary>What prediction says one bench should show. All currents are what the meter should read, A RMS; NaN where prediction cannot say.</summary>
public sealed record Expectation
{
    /// <summary>Steady current of the healthy unit at nominal mains.</summary>
    public required double SteadyAmps { get; init; }

    /// <summary>Low end of the band of healthy steady readings.</summary>
    public double BandLowAmps { get; init; } = double.NaN;

    /// <summary>High end of the band of healthy steady readings.</summary>
    public double BandHighAmps { get; init; } = double.NaN;

    /// <summary>Current with the unit's terminals shorted: the bank fully lit.</summary>
    public double ShortedAmps { get; init; } = double.NaN;

    /// <summary>Largest reading the meter may show at a cold switch-on.</summary>
    public double FirstReadingAmps { get; init; } = double.NaN;

    /// <summary>Time from switch-on until within 10 % of the steady current, s.</summary>
    public double SettleSeconds { get; init; } = double.NaN;

    /// <summary>Exponent of the line current against mains at the healthy point, d ln I / d ln V; NaN where unknown (0.6 is then assumed and corrected by learning).</summary>
    public double MainsExponent { get; init; } = double.NaN;

    /// <summary>Exponent of the bank alone when lamp-limited, d ln I / d ln V, about 0.5 to 0.6.</summary>
    public double BankExponent { get; init; } = 0.541;

    /// <summary>What each lamp's failing would do to the line current; empty where unknown.</summary>
    public IReadOnlyList<ExpectedLamp> Lamps { get; init; } = [];
}

/// <summary>What one lamp means to the line current.</summary>
/// <param name="Name">How the user calls the lamp.</param>
/// <param name="AmpsWithout">Steady line current with the healthy unit and this lamp dark (burnt out or switched off), A; 0 where the whole line goes through it.</param>
public sealed record ExpectedLamp(string Name, double AmpsWithout);
