using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Alerting.Life;

/// <summary>How alerts live: delays, latching, repeats. Seconds throughout.</summary>
public sealed record AlertRules
{
    /// <summary>A warning must stand this long before it is raised; never applied to critical ones.</summary>
    public double OnDelaySeconds { get; init; }

    /// <summary>
    /// A condition must be gone this long before the alert returns to normal; one that comes back earlier was never away.
    /// Costs no detection time, unlike an on-delay; 60 s is the usual start for a fast, noisy quantity (from memory of
    /// ISA-18.2 guidance).
    /// </summary>
    public double OffDelaySeconds { get; init; } = 60;

    /// <summary>Causes that a person must reset.</summary>
    public IReadOnlySet<string> Latching { get; init; } = DefaultLatching;

    /// <summary>Spacing of the first repeat of an unacknowledged critical alert; 0 for no repeats.</summary>
    public double FirstRepeatSeconds { get; init; } = 300;

    /// <summary>Each further spacing is longer by this factor.</summary>
    public double RepeatGrowth { get; init; } = 2;

    /// <summary>No spacing is longer than this.</summary>
    public double LongestRepeatSeconds { get; init; } = 3600;

    /// <summary>The longest time an alert may lie on the shelf.</summary>
    public double LongestShelfSeconds { get; init; } = 8 * 3600;

    /// <summary>So many raises of one cause within a minute are chattering: three is the usual test (common practice).</summary>
    public int ChatterCount { get; init; } = 3;

    /// <summary>Chattering is over after this time without a raise of the cause.</summary>
    public double ChatterQuietSeconds { get; init; } = 600;

    /// <summary>The signatures of a unit that must not be trusted again without a look.</summary>
    public static IReadOnlySet<string> DefaultLatching { get; } = new HashSet<string>(StringComparer.Ordinal)
    {
        Signature.HardShort.Text(), Signature.DevelopingShort.Text(), Signature.Runaway.Text(),
    };

    /// <summary>Spacing before the n-th repeat, counted from 0.</summary>
    public double RepeatSpacingSeconds(int repeats) =>
        Math.Min(LongestRepeatSeconds, FirstRepeatSeconds * Math.Pow(RepeatGrowth, repeats));
}
