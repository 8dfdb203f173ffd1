using System.ComponentModel.DataAnnotations;

namespace Lampwarden.Host.Configuration;

/// <summary>Where the record lies and what is forwarded.</summary>
public sealed class RecordingOptions
{
    /// <summary>Folder of the embedded store; relative to the current directory.</summary>
    [Required]
    public string Folder { get; set; } = "soaks";

    /// <summary>Forwarding to InfluxDB; null for none.</summary>
    public InfluxOptions? Influx { get; set; }
}

/// <summary>An InfluxDB server to forward to. The embedded store stays the truth.</summary>
public sealed class InfluxOptions
{
    /// <summary>Base address, such as http://127.0.0.1:8086.</summary>
    [Required, Url]
    public string Url { get; set; } = "";

    /// <summary>Organisation; v2 only.</summary>
    public string Org { get; set; } = "";

    /// <summary>Bucket (v2) or database (v1).</summary>
    [Required]
    public string Bucket { get; set; } = "";

    /// <summary>File with the token; null to take LAMPWARDEN_INFLUX_TOKEN from the environment.</summary>
    public string? TokenFile { get; set; }

    /// <summary>v2, or v1 for InfluxDB 1.x.</summary>
    [AllowedValues("v2", "v1")]
    public string Api { get; set; } = "v2";
}

/// <summary>The local page.</summary>
public sealed class WebOptions
{
    /// <summary>Address to listen on; loopback by default.</summary>
    [Required, Url]
    public string Address { get; set; } = "http://127.0.0.1:5080";

    /// <summary>File with the token that any address but loopback requires.</summary>
    public string? TokenFile { get; set; }
}
