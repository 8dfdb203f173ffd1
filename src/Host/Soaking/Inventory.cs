using Lampwarden.Analysis.Lamps;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Soaking;

/// <summary>From configured lamps to lamps that a bank text can name.</summary>
public static class Inventory
{
    /// <summary>The inventory of a configuration.</summary>
    /// <exception cref="ArgumentException">A calibration cannot be true of its lamp; the message says why and what to check.</exception>
    public static LampInventory Of(IEnumerable<LampOptions> lamps) => new(lamps.Select(Lamp));

    /// <summary>One lamp, with its calibration where it has one.</summary>
    public static Lamp Lamp(LampOptions options)
    {
        LampFill? fill = options.Fill switch { "gas" => LampFill.Gas, "vacuum" => LampFill.Vacuum, _ => null };
        var lamp = Analysis.Lamps.Lamp.FromNameplate(options.Name, options.RatedWatts, options.RatedVolts, fill);
        return options.Calibration is { } measured
            ? lamp.Calibrated(new LampCalibration(
                measured.ColdOhms ?? double.NaN,
                measured.RoomCelsius,
                measured.ShortedAmps ?? double.NaN,
                measured.ShortedVolts ?? double.NaN,
                measured.DimAmps ?? double.NaN,
                measured.DimVolts ?? double.NaN))
            : lamp;
    }
}
