using System.ComponentModel.DataAnnotations;

namespace Lampwarden.Acquisition;

/// <summary>One meter as the configuration describes it. Key names are contract; see config/ for the schema.</summary>
public sealed class MeterOptions
{
    /// <summary>Name shown in messages; unique within a bench.</summary>
    [Required]
    public string Name { get; set; } = "";

    /// <summary>What it measures: lineCurrent (A) or mainsVoltage (V).</summary>
    public Quantity Quantity { get; set; }

    /// <summary>The wire to it.</summary>
    public TransportOptions Transport { get; set; } = new();

    /// <summary>The language it speaks.</summary>
    public ProtocolOptions Protocol { get; set; } = new();

    /// <summary>Polls a second for scpi, the pace to expect for lines; 0.1 to 100.</summary>
    [Range(0.1, 100.0)]
    public double ReadingsPerSecond { get; set; } = 2;

    /// <summary>Length of the meter's measuring window in seconds, ending when the answer is sent; 0.001 to 10.</summary>
    [Range(0.001, 10.0)]
    public double WindowSeconds { get; set; } = 0.2;

    /// <summary>ac or acDc: an AC-coupled meter does not see a half-wave short for what it is.</summary>
    [AllowedValues("ac", "acDc")]
    public string Coupling { get; set; } = "ac";

    /// <summary>trueRms, firstOrder or meanResponding.</summary>
    [AllowedValues("trueRms", "firstOrder", "meanResponding")]
    public string Response { get; set; } = "trueRms";

    /// <summary>The maker's bound on its error.</summary>
    public AccuracyOptions Accuracy { get; set; } = new();

    /// <summary>Seconds to wait for an answer before the poll becomes a gap; 0.05 to 60, in real time even in a rehearsal.</summary>
    [Range(0.05, 60.0)]
    public double ReplyTimeoutSeconds { get; set; } = 1;

    /// <summary>
    /// Line current with scpi: when the current rises from nothing, so many seconds are polled as fast as the meter answers (at most 100 a
    /// second), because inrush is over soon; 0 to 600, 0 for never. A free-running meter keeps its own pace.
    /// </summary>
    [Range(0.0, 600.0)]
    public double SwitchOnSeconds { get; set; } = 5;
}

/// <summary>A meter's stated accuracy: a bound of percent of reading plus counts, as makers print it.</summary>
public sealed class AccuracyOptions
{
    /// <summary>Percent of reading, 0 to 20.</summary>
    [Range(0.0, 20.0)]
    public double PercentOfReading { get; set; } = 1.0;

    /// <summary>Counts to add, 0 to 1000.</summary>
    [Range(0.0, 1000.0)]
    public double Counts { get; set; } = 3;

    /// <summary>Size of one count in A or V; above 0.</summary>
    [Range(1e-9, 10.0)]
    public double CountSize { get; set; } = 0.001;
}

/// <summary>serial (System.IO.Ports) or tcp.</summary>
public sealed class TransportOptions
{
    /// <summary>serial or tcp.</summary>
    [AllowedValues("serial", "tcp")]
    public string Kind { get; set; } = "serial";

    /// <summary>Serial: device path or name. Tcp: number of the port, 1 to 65535.</summary>
    [Required]
    public string Port { get; set; } = "";

    /// <summary>Tcp: name or address of the meter or of the terminal server before it.</summary>
    public string Host { get; set; } = "127.0.0.1";

    /// <summary>Serial only.</summary>
    [Range(50, 4_000_000)]
    public int BaudRate { get; set; } = 9600;

    /// <summary>Serial only, 5 to 8.</summary>
    [Range(5, 8)]
    public int DataBits { get; set; } = 8;

    /// <summary>Serial only: none, odd, even, mark or space.</summary>
    [AllowedValues("none", "odd", "even", "mark", "space")]
    public string Parity { get; set; } = "none";

    /// <summary>Serial only: 1, 1.5 or 2.</summary>
    [AllowedValues(1.0, 1.5, 2.0)]
    public double StopBits { get; set; } = 1;

    /// <summary>Serial only: drive DTR to power an isolated cable; null leaves the line alone.</summary>
    public bool? Dtr { get; set; }

    /// <summary>Serial only: drive RTS to power an isolated cable; null leaves the line alone.</summary>
    public bool? Rts { get; set; }
}
