namespace Lampwarden.Benchmarks.Detection;

/// <summary>Which corpus a run is drawn from.</summary>
/// <param name="Corpus">1 to 199 for tuning, 200 to 299 for reports.</param>
/// <param name="Shifted">Harder than the watch was tuned on: cycling ambient, heavy tails, a restless mains.</param>
/// <param name="Rate">Readings per second.</param>
public sealed record CorpusOptions(int Corpus, bool Shifted = false, double Rate = 2)
{
    public const double NominalVolts = 120;

    /// <summary>Line current from lamps and unit instead of exponents.</summary>
    public bool Physical { get; init; }

    /// <summary>Leaves sags, taps and garbled readings out: what an oracle is spared.</summary>
    public bool Clean { get; init; }
}

/// <summary>What was drawn for one run: the truth a detector never sees.</summary>
public sealed record RunTruth
{
    public required double SteadyAmps { get; init; }
    public required double NoiseSd { get; init; }
    public required double Pole { get; init; }
    public required double CountAmps { get; init; }
    public required double Gamma { get; init; }
    public required double MainsSd { get; init; }
    public required double MainsTau { get; init; }
    public required double DailyShare { get; init; }
    public required double DailyPhase { get; init; }
    public required double WarmA1 { get; init; }
    public required double WarmT1 { get; init; }
    public required double WarmA2 { get; init; }
    public required double WarmT2 { get; init; }
    public required double AmbientSd { get; init; }
    public required double AmbientTau { get; init; }
    public required double HvacShare { get; init; }
    public required double HvacPeriod { get; init; }
    public required double CapAmps { get; init; }
    public required double OnsetSeconds { get; init; }
    public double LoadSeconds { get; init; } = double.NaN;
    public double LoadShare { get; init; }
    public double RelaxShare { get; init; }
    public double RelaxTau { get; init; } = 1;

    /// <summary>Warm-up at a time, relative.</summary>
    public double WarmUp(double t) => (WarmA1 * Math.Exp(-t / WarmT1)) + (WarmA2 * Math.Exp(-t / WarmT2));

    public double Daily(double t) => DailyShare * Math.Sin((2 * Math.PI * t / 86400) + DailyPhase);

    public static RunTruth Draw(CorpusOptions options, int run, bool mayStep)
    {
        var random = Xoshiro256.For(options.Corpus, run, options.Shifted ? 101 : 1);
        var truth = new RunTruth
        {
            SteadyAmps = random.LogUniform(0.1, 3),
            NoiseSd = random.LogUniform(0.001, 0.005),
            Pole = (int)(random.Unit() * 3) switch { 0 => 0, 1 => 0.3, _ => 0.6 },
            CountAmps = random.LogUniform(0.0001, 0.003),
            Gamma = random.Unit() < 0.75 ? random.Uniform(0.5, 1.1) : random.Uniform(-1.1, -0.6),
            MainsSd = options.Shifted ? 0.01 : 0.007,
            MainsTau = random.Uniform(1200, 3600),
            DailyShare = random.Uniform(0, 0.01),
            DailyPhase = random.Uniform(0, 2 * Math.PI),
            WarmA1 = random.Uniform(-0.10, 0.25),
            WarmT1 = random.Uniform(600, 2400),
            WarmA2 = random.Uniform(-0.005, 0.008),
            WarmT2 = random.Uniform(3600, 10800),
            AmbientSd = random.Uniform(0.001, 0.003),
            AmbientTau = random.Uniform(3600, 10800),
            HvacShare = random.Uniform(0.0015, 0.004),
            HvacPeriod = random.Uniform(900, 3000),
            CapAmps = random.Uniform(2, 5),
            OnsetSeconds = random.Uniform(3.5 * 3600, 4.5 * 3600),
        };
        truth = truth with
        {
            CountAmps = truth.CountAmps * truth.SteadyAmps,
            CapAmps = truth.CapAmps * truth.SteadyAmps,
            HvacShare = options.Shifted ? truth.HvacShare : 0,
        };
        var steps = random.Unit() < 0.3;
        var (at, share, sign) = (random.Uniform(2 * 3600, 20 * 3600), random.Uniform(0.1, 0.4), random.Sign());
        var (relax, tau) = (0.03 * random.Sign(), random.Uniform(600, 1800));
        return steps && mayStep
            ? truth with { LoadSeconds = at, LoadShare = share * sign, RelaxShare = relax, RelaxTau = tau }
            : truth;
    }
}
