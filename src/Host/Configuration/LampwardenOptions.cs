using System.ComponentModel.DataAnnotations;
using Lampwarden.Acquisition;

namespace Lampwarden.Host.Configuration;

/// <summary>The whole configuration file. Key names are contract; everything except <see cref="Benches"/> has a default.</summary>
public sealed class LampwardenOptions
{
    /// <summary>The lamp inventory: lamps that bank texts may call by name.</summary>
    public IList<LampOptions> Lamps { get; set; } = [];

    /// <summary>The benches to watch, one limiter with its meters each.</summary>
    public IList<BenchOptions> Benches { get; set; } = [];

    /// <summary>Where the record lies and what is forwarded.</summary>
    public RecordingOptions Recording { get; set; } = new();

    /// <summary>Who is told.</summary>
    public AlertsOptions Alerts { get; set; } = new();

    /// <summary>Who notices when the watcher itself dies, and who may look at its figures.</summary>
    public UnattendedOptions Unattended { get; set; } = new();

    /// <summary>The local page.</summary>
    public WebOptions Web { get; set; } = new();
}

/// <summary>One lamp of the inventory, as its nameplate says and as it was measured.</summary>
public sealed class LampOptions
{
    /// <summary>The name a bank text uses; letters, digits and hyphens, beginning with a letter.</summary>
    [Required, RegularExpression("^[A-Za-z][A-Za-z0-9-]*$")]
    public string Name { get; set; } = "";

    /// <summary>Nameplate watts at <see cref="RatedVolts"/>; 1 to 2000.</summary>
    [Range(1.0, 2000.0)]
    public double RatedWatts { get; set; }

    /// <summary>Nameplate volts: never assumed to equal the mains; 6 to 300.</summary>
    [Range(6.0, 300.0)]
    public double RatedVolts { get; set; }

    /// <summary>gas or vacuum; by default vacuum up to 25 W and gas above (common practice, from memory).</summary>
    [AllowedValues(null, "gas", "vacuum")]
    public string? Fill { get; set; }

    /// <summary>What was measured on this very lamp; null where nothing was.</summary>
    public LampCalibrationOptions? Calibration { get; set; }
}

/// <summary>Measurements on one lamp. Each pair belongs together: ohms with room, amps with volts.</summary>
public sealed class LampCalibrationOptions
{
    /// <summary>Cold resistance in ohms, leads subtracted, lamp off for ten minutes.</summary>
    [Range(0.05, 10000.0)]
    public double? ColdOhms { get; set; }

    /// <summary>Room temperature at that measurement in degrees Celsius.</summary>
    [Range(-10.0, 50.0)]
    public double RoomCelsius { get; set; } = 20;

    /// <summary>Line current in amperes with the lamp alone across the mains (output shorted), after two seconds.</summary>
    [Range(0.001, 50.0)]
    public double? ShortedAmps { get; set; }

    /// <summary>Mains volts at that measurement.</summary>
    [Range(6.0, 300.0)]
    public double? ShortedVolts { get; set; }

    /// <summary>Third point: line current in amperes with the lamp dim, at 5 to 20 % of its rated volts.</summary>
    [Range(0.0001, 50.0)]
    public double? DimAmps { get; set; }

    /// <summary>Volts across the lamp at the third point.</summary>
    [Range(0.1, 300.0)]
    public double? DimVolts { get; set; }
}
