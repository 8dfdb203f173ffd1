using System.CommandLine;
using System.Globalization;
using Lampwarden.Acquisition;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Host.Commands.Calibrating;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Soaking;

namespace Lampwarden.Host.Commands;

/// <summary><c>calibrate LAMP</c>: a lamp's measurements, by meter or by hand, into the inventory.</summary>
internal sealed class CalibrateCommand : CliCommand
{
    private readonly Argument<string[]> _lamps = new("LAMP") { Description = "Lamps of the inventory by name, or all", Arity = ArgumentArity.OneOrMore };
    private readonly Option<string> _config = CommonOptions.Config();
    private readonly Option<string?> _bench = new("--bench") { Description = "Bench whose meters are used; the first one unless given", HelpName = "NAME" };
    private readonly Option<double?> _coldOhms = new("--cold-ohms") { Description = "Cold resistance less the leads, in ohms", HelpName = "X" };
    private readonly Option<double> _room = new("--room-celsius") { Description = "Room temperature at that time", HelpName = "T", DefaultValueFactory = _ => 20 };
    private readonly Option<double?> _shortedAmps = new("--shorted-amps") { Description = "Line current with the lamp alone and the output shorted", HelpName = "A" };
    private readonly Option<double?> _shortedVolts = new("--shorted-volts") { Description = "Mains at that time", HelpName = "V" };
    private readonly Option<double?> _dimAmps = new("--dim-amps") { Description = "Line current with the lamp dim", HelpName = "A" };
    private readonly Option<double?> _dimVolts = new("--dim-volts") { Description = "Volts across the lamp at that time", HelpName = "V" };
    private readonly Option<bool> _yes = new("--yes") { Description = "Write without asking" };

    public CalibrateCommand()
        : base("calibrate", "Measure lamps, by meter or by hand, into the inventory")
    {
        Add(_lamps);
        foreach (var option in (Option[])[_config, _bench, _coldOhms, _room, _shortedAmps, _shortedVolts, _dimAmps, _dimVolts, _yes])
        {
            Add(option);
        }
    }

    protected override async Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var path = parsed.GetValue(_config)!;
        var options = ConfigurationFile.Load(path);
        var lamps = Chosen(options, parsed.GetValue(_lamps)!);
        var typed = Typed(parsed);
        if (typed is not null && lamps.Count > 1)
        {
            throw new BadInputException("Values on the command line are one lamp's; name one lamp.");
        }

        var bench = options.Benches.FirstOrDefault(one => parsed.GetValue(_bench) is not { } name || one.Name == name)
            ?? throw new BadInputException($"There is no bench '{parsed.GetValue(_bench)}'; there are {string.Join(", ", options.Benches.Select(one => one.Name))}.");
        var mains = Mains.Parse(bench.Mains);
        var walk = new CalibrationWalk(Console.In, terminal.Prose, bench.Meters.Single(meter => meter.Quantity == Quantity.LineCurrent),
            bench.Meters.SingleOrDefault(meter => meter.Quantity == Quantity.MainsVoltage), mains.Volts);
        var results = new List<CalibrationResult>();
        foreach (var lamp in lamps)
        {
            results.Add(await OneAsync(lamp, typed ?? await walk.AskAsync(lamp, cancellation), mains, path, typed is not null || parsed.GetValue(_yes), terminal, cancellation));
        }

        if (terminal.WantsJson)
        {
            terminal.WriteJson(new { lamps = results });
        }

        return results.All(one => one.Backup is not null) ? ExitCode.Done : ExitCode.No;
    }

    private static async Task<CalibrationResult> OneAsync(
        LampOptions lamp, LampCalibrationOptions measured, Mains mains, string path, bool write, Terminal terminal, CancellationToken cancellation)
    {
        if (measured is { ColdOhms: null, ShortedAmps: null })
        {
            throw new BadInputException($"Lamp '{lamp.Name}': neither cold ohms nor shorted current was given; one of them is needed. Nothing was written.");
        }

        if (measured.ShortedAmps is not null && measured.ShortedVolts is null)
        {
            throw new BadInputException($"Lamp '{lamp.Name}': a shorted current needs the mains volts at that time (--shorted-volts). Nothing was written.");
        }

        Lamp after;
        var before = Inventory.Lamp(lamp);
        KeepWhatWasLeftOut(measured, lamp.Calibration);
        lamp.Calibration = measured;
        try
        {
            after = Inventory.Lamp(lamp);
        }
        catch (CalibrationException refused)
        {
            throw new BadInputException(refused.Message + " Nothing was written.");
        }

        var curve = CalibrationTable.Of(mains, before, after);
        terminal.Prose.WriteLine($"Lamp {lamp.Name} alone in the limiter at {mains}:");
        CalibrationTable.Tell(terminal.Prose, curve);
        if (!write)
        {
            terminal.Prose.Write($"Write this to {path}? [y/N]: ");
            write = (await Console.In.ReadLineAsync(cancellation))?.Trim().Equals("y", StringComparison.OrdinalIgnoreCase) == true;
        }

        var backup = write ? InventoryFile.Write(path, lamp.Name, measured, TimeProvider.System.GetUtcNow()) : null;
        terminal.Prose.WriteLine(backup is null ? "Nothing was written." : $"Written to {path}; what it was before lies in {backup}.");
        return new CalibrationResult(lamp.Name, measured, curve, backup);
    }

    /// <summary>A value that was not taken this time stays as it was; the pairs stay pairs.</summary>
    private static void KeepWhatWasLeftOut(LampCalibrationOptions measured, LampCalibrationOptions? before)
    {
        if (before is null)
        {
            return;
        }

        if (measured.ColdOhms is null)
        {
            (measured.ColdOhms, measured.RoomCelsius) = (before.ColdOhms, before.RoomCelsius);
        }

        if (measured.ShortedAmps is null)
        {
            (measured.ShortedAmps, measured.ShortedVolts) = (before.ShortedAmps, before.ShortedVolts);
        }

        if (measured.DimAmps is null)
        {
            (measured.DimAmps, measured.DimVolts) = (before.DimAmps, before.DimVolts);
        }
    }

    private static List<LampOptions> Chosen(LampwardenOptions options, string[] names)
    {
        if (names is ["all"])
        {
            return options.Lamps.Count > 0 ? [.. options.Lamps] : throw new BadInputException("The inventory has no lamps; add them to lamps in the configuration first.");
        }

        return [.. names.Select(name => options.Lamps.FirstOrDefault(lamp => lamp.Name.Equals(name, StringComparison.OrdinalIgnoreCase))
            ?? throw new BadInputException(
                $"There is no lamp '{name}' in the inventory; {(options.Lamps.Count == 0 ? "it has none" : $"there are {string.Join(", ", options.Lamps.Select(lamp => lamp.Name))}")}. Add it to lamps in the configuration first, with name, ratedWatts and ratedVolts."))];
    }

    private LampCalibrationOptions? Typed(ParseResult parsed)
    {
        var typed = new LampCalibrationOptions
        {
            ColdOhms = parsed.GetValue(_coldOhms),
            RoomCelsius = parsed.GetValue(_room),
            ShortedAmps = parsed.GetValue(_shortedAmps),
            ShortedVolts = parsed.GetValue(_shortedVolts),
            DimAmps = parsed.GetValue(_dimAmps),
            DimVolts = parsed.GetValue(_dimVolts),
        };
        return typed is { ColdOhms: null, ShortedAmps: null, ShortedVolts: null, DimAmps: null, DimVolts: null } ? null : typed;
    }

    private sealed record CalibrationResult(string Lamp, LampCalibrationOptions Calibration, IReadOnlyList<CurvePoint> Curve, string? Backup);
}
