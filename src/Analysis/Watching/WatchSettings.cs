namespace Lampwarden.Analysis.Watching;

/// <summary>All that a watch is told before the first reading. Nothing in it changes during a run except by <see cref="Watch.Announce"/>.</summary>
public sealed record WatchSettings
{
    /// <summary>Nominal rate at which readings are asked for, per second; 0.2 to 100.</summary>
    public double ReadingsPerSecond { get; init; } = 2;

    /// <summary>Nominal mains in volts; 50 to 500. Scales measured mains voltage, nothing else.</summary>
    public double NominalMainsVolts { get; init; } = 120;

    /// <summary>Whether observations carry the mains voltage. Without it creep is found 3 to 5 times later.</summary>
    public bool MainsMeasured { get; init; }

    /// <summary>Nominal rate of the mains meter, per second; null: a reading of its own with each of the current.</summary>
    public double? MainsReadingsPerSecond { get; init; }

    /// <summary>Whether several readings of the current share one of the mains, so that the current shows a dip before the mains does.</summary>
    internal bool MainsIsSlower => MainsReadingsPerSecond < 0.8 * ReadingsPerSecond;

    /// <summary>Length of the soak in hours; null where none was planned (the judgement then asks for no length).</summary>
    public double? PlannedHours { get; init; }

    /// <summary>What the unit must keep to pass.</summary>
    public AcceptanceLimits Acceptance { get; init; } = new();

    /// <summary>What is known of the current meter.</summary>
    public MeterTraits Meter { get; init; } = new();

    /// <summary>What prediction says the bench should show; null for relative watching alone, where a fault present at switch-on stays unseen.</summary>
    public Expectation? Expectation { get; init; }

    /// <summary>Throws with every value that is out of range, each with its rule.</summary>
    /// <exception cref="ArgumentException">A value is outside its range.</exception>
    internal void Validate()
    {
        var faults = new List<string>();
        Check(faults, nameof(ReadingsPerSecond), ReadingsPerSecond, 0.2, 100);
        Check(faults, nameof(NominalMainsVolts), NominalMainsVolts, 50, 500);
        Check(faults, nameof(MainsReadingsPerSecond), MainsReadingsPerSecond ?? 1, 0.001, 1000);
        Check(faults, nameof(PlannedHours), PlannedHours ?? 1, 0.001, 10_000);
        Check(faults, nameof(Acceptance.SteadyWithinPercent), Acceptance.SteadyWithinPercent, 0.1, 1000);
        Check(faults, nameof(Acceptance.LeastCoverageShare), Acceptance.LeastCoverageShare, 0, 1);
        Check(faults, nameof(Meter.CountAmps), Meter.CountAmps, 0, 10);
        Check(faults, nameof(Meter.WindowSeconds), Meter.WindowSeconds, 0, 60);
        if (Expectation is { } expected)
        {
            Check(faults, nameof(expected.SteadyAmps), expected.SteadyAmps, 1e-6, 1000);
        }

        if (faults.Count > 0)
        {
            throw new ArgumentException($"The watch cannot start: {string.Join("; ", faults)}.");
        }
    }

    private static void Check(List<string> faults, string name, double value, double low, double high)
    {
        if (!(value >= low && value <= high))
        {
            faults.Add(FormattableString.Invariant($"{name} is {value}, expected {low} to {high}"));
        }
    }
}

/// <summary>What the unit must keep to pass.</summary>
/// <param name="SteadyWithinPercent">Largest departure of the steady current from the prediction (or, without one, from its own level after warm-up), percent.</param>
/// <param name="LeastCoverageShare">Least share of the run, 0 to 1, that must have readings for a verdict other than incomplete.</param>
public sealed record AcceptanceLimits(double SteadyWithinPercent = 15, double LeastCoverageShare = 0.98);

/// <summary>What is known of the current meter. The accuracy bounds the absolute value; the noise is learned.</summary>
/// <param name="WindowSeconds">Time over which one reading is averaged, s.</param>
/// <param name="PercentOfReading">Accuracy, percent of reading.</param>
/// <param name="Counts">Accuracy, counts added to the above.</param>
/// <param name="CountAmps">Size of one count, A; 0 where unknown.</param>
/// <param name="AcCoupled">True where the meter does not see the direct part of the current (a half-wave fault then reads low).</param>
public sealed record MeterTraits(
    double WindowSeconds = 0.2,
    double PercentOfReading = 0.8,
    double Counts = 3,
    double CountAmps = 0.001,
    bool AcCoupled = true);
