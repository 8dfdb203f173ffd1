using System.ComponentModel.DataAnnotations;

namespace Lampwarden.Host.Configuration;

/// <summary>What makes somebody notice when the watcher itself dies.</summary>
public sealed class UnattendedOptions
{
    /// <summary>Address to GET while readings are being handled, for a service that tells when the pings stop; null for none.</summary>
    [Url]
    public string? PingUrl { get; set; }

    /// <summary>Seconds between pings; 5 to 3600.</summary>
    [Range(5.0, 3600.0)]
    public double PingSeconds { get; set; } = 60;

    /// <summary>Seconds without a reading handled after which a bench's loop counts as stuck; 5 to 3600.</summary>
    [Range(5.0, 3600.0)]
    public double StuckAfterSeconds { get; set; } = 30;

    /// <summary>Whether a process with a stuck loop ends itself, for the service manager to start it again.</summary>
    public bool EndWhenStuck { get; set; } = true;

    /// <summary>Minutes since a run was left off within which watch --resume carries it on; 1 to 1440.</summary>
    [Range(1.0, 1440.0)]
    public double ResumeWithinMinutes { get; set; } = 60;

    /// <summary>Address of an OpenTelemetry collector that takes metrics over OTLP (http/protobuf), such as http://127.0.0.1:4318; /v1/metrics is added where no path is given. Null for none.</summary>
    [Url]
    public string? OtlpUrl { get; set; }
}
