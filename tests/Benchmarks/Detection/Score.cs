using System.Globalization;

namespace Lampwarden.Benchmarks.Detection;

/// <summary>What one detector made of one faulty run.</summary>
/// <param name="DelaySeconds">Infinite if missed; NaN if the trial is dropped because of an alarm in the 90 minutes before the onset.</param>
public readonly record struct Trial(double DelaySeconds, double Excess, string Called, double Oracle, double Cautious)
{
    /// <summary>Where the true moment of the warning level lies against the forecast: -1 before its interval, 0 inside, +1 after; null without one.</summary>
    public int? Forecast { get; init; }

    /// <summary>Further findings raised within ten seconds of the alarm: an alarm should be amended, not doubled.</summary>
    public int Again { get; init; }

    /// <summary>Whether the lamp that went dark was named; null where lamps are too much alike or none went.</summary>
    public bool? LampNamed { get; init; }
}

/// <summary>Rules and arithmetic of the score.</summary>
public static class Score
{
    public const double EpisodeSeconds = 1800;
    public const double DropSeconds = 5400;

    /// <summary>The value below which a share of the trials lie; the next larger one, as a miss counts as infinite.</summary>
    public static double Quantile(IEnumerable<double> values, double share)
    {
        var sorted = values.Where(value => !double.IsNaN(value)).Order().ToArray();
        return sorted.Length == 0 ? double.NaN : sorted[Math.Clamp((int)Math.Ceiling(share * sorted.Length) - 1, 0, sorted.Length - 1)];
    }

    /// <summary>Central 95 % interval of a Poisson mean after seeing a count (chi-square quantiles, found by bisection on the Poisson sum).</summary>
    public static (double Low, double High) PoissonInterval(int count)
    {
        var low = count == 0 ? 0 : Solve(mean => 1 - AtMost(count - 1, mean), 0.025, rising: true);
        return (low, Solve(mean => AtMost(count, mean), 0.025, rising: false));
    }

    private static double AtMost(int count, double mean)
    {
        var (term, sum) = (Math.Exp(-mean), 0.0);
        for (var k = 0; k <= count; k++)
        {
            sum += term;
            term *= mean / (k + 1);
        }

        return sum;
    }

    private static double Solve(Func<double, double> f, double target, bool rising)
    {
        var (low, high) = (0.0, 500.0);
        for (var i = 0; i < 80; i++)
        {
            var middle = (low + high) / 2;
            (low, high) = f(middle) < target == rising ? (middle, high) : (low, middle);
        }

        return low;
    }

    public static string Show(double value, string format = "0") =>
        double.IsNaN(value) ? "-" : double.IsInfinity(value) ? "missed" : value.ToString(format, CultureInfo.InvariantCulture);

    /// <summary>The names that are right for a fault.</summary>
    public static bool IsRight(FaultKind kind, string called) => kind switch
    {
        FaultKind.Creep => called == "developing-short",
        FaultKind.Runaway => called == "runaway",
        FaultKind.Short => called == "hard-short",
        FaultKind.Open => called == "open-circuit",
        FaultKind.Lamp => called == "lamp-out",
        FaultKind.Arcing => called == "intermittent",
        FaultKind.Hiccup => called == "cycling",
        _ => false,
    };
}
