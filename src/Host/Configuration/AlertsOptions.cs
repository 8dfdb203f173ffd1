using System.ComponentModel.DataAnnotations;

namespace Lampwarden.Host.Configuration;

/// <summary>How alerts live and who is told.</summary>
public sealed class AlertsOptions
{
    /// <summary>What this host calls itself in every message; null for the machine's name.</summary>
    [RegularExpression("^[A-Za-z0-9][A-Za-z0-9._-]{0,62}$")]
    public string? Instance { get; set; }

    /// <summary>Seconds a warning must stand before it is raised; 0 to 600. Never applied to critical alerts.</summary>
    [Range(0.0, 600.0)]
    public double OnDelaySeconds { get; set; }

    /// <summary>Seconds a condition must be gone before its alert returns to normal; 0 to 3600.</summary>
    [Range(0.0, 3600.0)]
    public double OffDelaySeconds { get; set; } = 60;

    /// <summary>Causes that a person must reset; empty takes hard-short, developing-short and runaway.</summary>
    public IList<string> Latch { get; set; } = [];

    /// <summary>Minutes until a critical alert that nobody acknowledged is told again; 0 for never, to 1440.</summary>
    [Range(0.0, 1440.0)]
    public double RepeatMinutes { get; set; } = 5;

    /// <summary>Each further spacing is longer by this factor; 1 to 10.</summary>
    [Range(1.0, 10.0)]
    public double RepeatGrowth { get; set; } = 2;

    /// <summary>No spacing is longer than this many minutes; 1 to 1440.</summary>
    [Range(1.0, 1440.0)]
    public double RepeatLongestMinutes { get; set; } = 60;

    /// <summary>Hours an alert may be shelved at most; 0.1 to 72.</summary>
    [Range(0.1, 72.0)]
    public double ShelveAtMostHours { get; set; } = 8;

    /// <summary>Raises of one cause within a minute that are reported as chattering; 2 to 100.</summary>
    [Range(2, 100)]
    public int ChatterPerMinute { get; set; } = 3;

    /// <summary>Routes beyond the log, each on its own.</summary>
    public IList<AlertRouteOptions> Routes { get; set; } = [];

    /// <summary>An output that opens a contactor of the user's; null for none. A convenience, no protective device.</summary>
    public CutOffOptions? CutOff { get; set; }
}
