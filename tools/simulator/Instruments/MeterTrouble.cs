using System.ComponentModel.DataAnnotations;

namespace Lampwarden.Simulator.Instruments;

/// <summary>What can go wrong with a meter or its cable. The written form is kebab-case.</summary>
public enum MeterTrouble
{
    /// <summary>The cable is out; when it comes back it is another device under the old name.</summary>
    Unplugged,

    /// <summary>It says nothing.</summary>
    Silent,

    /// <summary>It sends lines that nobody asked for, without pause.</summary>
    Babbling,

    /// <summary>It shows the same value whatever is measured.</summary>
    Stuck,

    /// <summary>The two sides run at different baud rates: every byte is wrong.</summary>
    Garbled,

    /// <summary>Its lines break off in the middle and have no end.</summary>
    HalfLines,

    /// <summary>NUL bytes around its lines, and in every second one inside.</summary>
    Nuls,

    /// <summary>A megabyte without a line end, once.</summary>
    Endless,

    /// <summary>It answers the question before last.</summary>
    Late,

    /// <summary>It was switched off and on: setting lost, silent for as long as it takes to start.</summary>
    Restarted,

    /// <summary>Its lines come byte by byte.</summary>
    Split,

    /// <summary>Every line comes twice in one piece.</summary>
    Glued,
}

/// <summary>A trouble at a time.</summary>
public sealed class ScheduledTrouble
{
    /// <summary>What goes wrong.</summary>
    public MeterTrouble Kind { get; set; }

    /// <summary>Simulated second at which it begins.</summary>
    [Range(0.0, 3e6)]
    public double AtSeconds { get; set; }

    /// <summary>Simulated seconds it lasts; 0 for good (an endless line and a quick restart last no time anyhow).</summary>
    [Range(0.0, 3e6)]
    public double ForSeconds { get; set; }
}
