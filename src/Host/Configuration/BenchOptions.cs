using System.ComponentModel.DataAnnotations;
using System.Text.Json.Serialization;
using Lampwarden.Acquisition;

namespace Lampwarden.Host.Configuration;

/// <summary>One bench: one limiter, the unit behind it, and the meters that watch it.</summary>
public sealed class BenchOptions
{
    /// <summary>Unique name, shown everywhere.</summary>
    [Required]
    public string Name { get; set; } = "";

    /// <summary>Mains text, such as 120 V 60 Hz.</summary>
    [Required]
    public string Mains { get; set; } = "";

    /// <summary>Bank text, such as 75 W || 25 W, or inventory names.</summary>
    [Required]
    public string Bank { get; set; } = "";

    /// <summary>Unit text, such as rectifier 45 W 470 uF.</summary>
    [Required]
    public string Unit { get; set; } = "";

    /// <summary>What the technician calls the unit itself: a job or a serial number; kept with the run.</summary>
    public string? UnitLabel { get; set; }

    /// <summary>The unit's model. A unit whose model has a reference ('reference' command) is held to that one's narrower band; null for none.</summary>
    public string? UnitModel { get; set; }

    /// <summary>The meters; at least one measures lineCurrent, at most one each quantity.</summary>
    public IList<MeterOptions> Meters { get; set; } = [];

    /// <summary>How long, and what is good enough.</summary>
    public SoakOptions Soak { get; set; } = new();

    /// <summary>
    /// The inventory this bench's texts were read with. No key of the file: it is filled in when the file is read, so that
    /// a stored run knows its lamps also after the inventory has changed.
    /// </summary>
    [JsonInclude]
    public IReadOnlyList<LampOptions> Inventory { get; internal set; } = [];

    /// <summary>The same bench with another bank, unit or plan; null leaves a thing as it is, except the label, which belongs to the unit.</summary>
    internal BenchOptions With(
        string bank, string? unit = null, double? plannedHours = null, string? unitLabel = null, double? switchOnWaitSeconds = null) => new()
    {
        Name = Name,
        Mains = Mains,
        Bank = bank,
        Unit = unit ?? Unit,
        UnitLabel = unitLabel,
        UnitModel = (unit ?? Unit) == Unit ? UnitModel : null,
        Meters = Meters,
        Inventory = Inventory,
        Soak = new SoakOptions
        {
            PlannedHours = plannedHours ?? Soak.PlannedHours,
            StartFrom = Soak.StartFrom,
            // A current the user expects of the configured unit says nothing of another.
            ExpectedAmps = (unit ?? Unit) == Unit && bank == Bank ? Soak.ExpectedAmps : null,
            SwitchOnWaitSeconds = switchOnWaitSeconds ?? Soak.SwitchOnWaitSeconds,
            Acceptance = Soak.Acceptance,
        },
    };
}

/// <summary>One soak's plan.</summary>
public sealed class SoakOptions
{
    /// <summary>Hours from switch-on to the verdict; 0.001 to 1000.</summary>
    [Range(0.001, 1000.0)]
    public double PlannedHours { get; set; } = 12;

    /// <summary>switchOn: the service waits for current and begins by itself; page: it waits until somebody starts a soak on the page.</summary>
    [AllowedValues("switchOn", "page")]
    public string StartFrom { get; set; } = "switchOn";

    /// <summary>Line current in amperes the user expects once settled; null to rely on the prediction alone.</summary>
    [Range(0.0001, 100.0)]
    public double? ExpectedAmps { get; set; }

    /// <summary>Seconds to wait for current before the run begins without it; 0 to 86400.</summary>
    [Range(0.0, 86400.0)]
    public double SwitchOnWaitSeconds { get; set; } = 30;

    /// <summary>What a passed soak must show.</summary>
    public AcceptanceOptions Acceptance { get; set; } = new();
}

/// <summary>Limits a finished soak is judged by.</summary>
public sealed class AcceptanceOptions
{
    /// <summary>Settled current within this many percent of the prediction; 0.1 to 100.</summary>
    [Range(0.1, 100.0)]
    public double SteadyWithinPercent { get; set; } = 15;

    /// <summary>Share of the planned time that may lack readings, in percent; 0 to 100.</summary>
    [Range(0.0, 100.0)]
    public double GapsAtMostPercent { get; set; } = 5;
}
