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

    /// <summary>The same bench after a change that multiplies its healthy current, a lamp gone or come.</summary>
    internal Expectation Scaled(double factor, ExpectedLamp changed) => this with
    {
        SteadyAmps = SteadyAmps * factor,
        BandLowAmps = BandLowAmps * factor,
        BandHighAmps = BandHighAmps * factor,
        Lamps = [.. Lamps.Where(lamp => lamp != changed).Select(lamp => lamp with { AmpsWithout = lamp.AmpsWithout * factor, AmpsWith = lamp.AmpsWith * factor })],
    };

    internal static void Transfer(StateStream state, ref Expectation? expectation)
    {
        var has = expectation is not null;
        state.Field(ref has);
        if (!has)
        {
            expectation = null;
            return;
        }

        var e = expectation ?? new Expectation { SteadyAmps = 0 };
        double[] numbers = [e.SteadyAmps, e.BandLowAmps, e.BandHighAmps, e.ShortedAmps, e.FirstReadingAmps, e.SettleSeconds, e.MainsExponent, e.BankExponent];
        state.Fields(numbers);
        var count = e.Lamps.Count;
        state.Field(ref count);
        var lamps = new ExpectedLamp[count];
        for (var i = 0; i < count; i++)
        {
            var (name, without, with) = state.Reading ? new ExpectedLamp("", 0) : e.Lamps[i];
            state.Field(ref name);
            state.Field(ref without);
            state.Field(ref with);
            lamps[i] = new ExpectedLamp(name, without, with);
        }

        expectation = state.Reading
            ? new Expectation
            {
                SteadyAmps = numbers[0],
                BandLowAmps = numbers[1],
                BandHighAmps = numbers[2],
                ShortedAmps = numbers[3],
                FirstReadingAmps = numbers[4],
                SettleSeconds = numbers[5],
                MainsExponent = numbers[6],
                BankExponent = numbers[7],
                Lamps = lamps,
            }
            : expectation;
    }

    /// <summary>What each lamp's failing would do to the line current; empty where unknown.</summary>
    public IReadOnlyList<ExpectedLamp> Lamps { get; init; } = [];
}

/// <summary>What one lamp means to the line current.</summary>
/// <param name="Name">How the user calls the lamp.</param>
/// <param name="AmpsWithout">Steady line current with the healthy unit and this lamp dark (burnt out or switched off), A; 0 where the whole line goes through it.</param>
/// <param name="AmpsWith">Steady line current if this lamp, now behind an open switch, were switched in, A; NaN for a lamp that is lit.</param>
public sealed record ExpectedLamp(string Name, double AmpsWithout, double AmpsWith = double.NaN);
