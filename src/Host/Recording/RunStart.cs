namespace Lampwarden.Host.Recording;

/// <summary>What is known of a run when it begins. Texts are kept as given.</summary>
public sealed record RunStart
{
    /// <summary>Name of the bench.</summary>
    public required string Bench { get; init; }

    /// <summary>Unit text, such as <c>rectifier 45 W 470 uF</c>.</summary>
    public required string Unit { get; init; }

    /// <summary>Bank text, such as <c>75 W || 25 W</c>.</summary>
    public required string Bank { get; init; }

    /// <summary>Mains text, such as <c>120 V 60 Hz</c>.</summary>
    public required string Mains { get; init; }

    /// <summary>Planned length in hours; NaN where none is planned.</summary>
    public double PlannedHours { get; init; } = double.NaN;

    /// <summary>The bench's whole configuration as a JSON document.</summary>
    public string ConfigurationJson { get; init; } = "{}";

    /// <summary>What was predicted, as <c>predict --json</c> prints it; null without a prediction.</summary>
    public string? PredictionJson { get; init; }

    /// <summary>Version of the program that records.</summary>
    public string Software { get; init; } = "";

    /// <summary>When the run began; null takes the store's clock.</summary>
    public DateTimeOffset? StartedUtc { get; init; }

    /// <summary>The interrupted run that this one carries on.</summary>
    public string? ResumedFrom { get; init; }

    /// <summary>What the technician calls the unit itself: a serial number, a job ticket.</summary>
    public string? UnitLabel { get; init; }
}
