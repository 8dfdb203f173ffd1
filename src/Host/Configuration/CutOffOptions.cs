using System.ComponentModel.DataAnnotations;

namespace Lampwarden.Host.Configuration;

/// <summary>
/// An output that opens a contactor of the user's when a finding calls for it. A convenience, no protective device: fuse,
/// RCD/GFCI and the limiter itself do the protecting. There is no text for closing: a person closes.
/// </summary>
public sealed class CutOffOptions
{
    /// <summary>True: everything but the wire: trips are recorded and told, nothing is sent.</summary>
    public bool DryRun { get; set; }

    /// <summary>Signatures that may trip it while critical.</summary>
    public IList<string> Trips { get; set; } = [];

    /// <summary>Seconds a finding must stand before it trips; 0 to 600.</summary>
    [Range(0.0, 600.0)]
    public double OnDelaySeconds { get; set; }

    /// <summary>One output for each bench that has a contactor.</summary>
    public IList<CutOffOutputOptions> Outputs { get; set; } = [];
}

/// <summary>The wire to one bench's contactor.</summary>
public sealed class CutOffOutputOptions
{
    /// <summary>The bench's name.</summary>
    [Required]
    public string Bench { get; set; } = "";

    /// <summary>tcp, serial or mqtt.</summary>
    [AllowedValues("tcp", "serial", "mqtt")]
    public string Kind { get; set; } = "tcp";

    /// <summary>Tcp and mqtt: name or address.</summary>
    public string Host { get; set; } = "127.0.0.1";

    /// <summary>Tcp and mqtt: number of the port. Serial: path or name of the device.</summary>
    [Required]
    public string Port { get; set; } = "";

    /// <summary>Serial only.</summary>
    [Range(50, 4_000_000)]
    public int BaudRate { get; set; } = 9600;

    /// <summary>Mqtt only: the topic that the contactor listens to.</summary>
    public string Topic { get; set; } = "";

    /// <summary>What opens the contactor; \n, \r and \t may be written so. Empty only with a keep-alive: then silence opens it.</summary>
    public string OpenText { get; set; } = "";

    /// <summary>Tcp and serial: how the answer to it must begin; null where the contactor does not answer.</summary>
    public string? OpenAnswer { get; set; }

    /// <summary>What keeps the contactor closed while it is sent; null where it needs nothing (not fail-safe).</summary>
    public string? KeepAliveText { get; set; }

    /// <summary>Seconds between keep-alives; 0.1 to 60.</summary>
    [Range(0.1, 60.0)]
    public double KeepAliveSeconds { get; set; } = 1;

    /// <summary>Seconds without a keep-alive after which the contactor opens by itself; 0.2 to 600.</summary>
    [Range(0.2, 600.0)]
    public double LapseSeconds { get; set; } = 5;
}
