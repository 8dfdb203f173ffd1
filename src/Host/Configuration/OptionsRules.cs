using System.Globalization;
using Lampwarden.Acquisition;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Units;
using Lampwarden.Host.Soaking;

namespace Lampwarden.Host.Configuration;

/// <summary>Rules that no single key can state: texts that must parse, names that must differ, pairs that belong together.</summary>
internal static class OptionsRules
{
    /// <summary>Adds a fault for each broken rule; a key that already has one is left alone.</summary>
    public static void Check(LampwardenOptions options, List<Fault> faults)
    {
        CheckUnique(options.Lamps.Select(lamp => lamp.Name), "lamps", faults);
        for (var index = 0; index < options.Lamps.Count; index++)
        {
            CheckLamp(options.Lamps[index], string.Create(CultureInfo.InvariantCulture, $"lamps[{index}]"), faults);
        }

        CheckUnique(options.Benches.Select(bench => bench.Name), "benches", faults);
        if (options.Benches.Count == 0)
        {
            faults.Add(new Fault("benches", null, "at least one bench must be described"));
        }

        var inventory = !faults.Exists(fault => fault.Key.StartsWith("lamps", StringComparison.Ordinal)) ? Inventory.Of(options.Lamps) : null;
        for (var index = 0; index < options.Benches.Count; index++)
        {
            CheckBench(options.Benches[index], string.Create(CultureInfo.InvariantCulture, $"benches[{index}]"), options, inventory, faults);
        }
    }

    private static void CheckLamp(LampOptions lamp, string key, List<Fault> faults)
    {
        if (faults.Exists(fault => fault.Key.StartsWith(key, StringComparison.Ordinal)))
        {
            return;
        }

        if (lamp.Calibration is { } calibration)
        {
            if (calibration.ShortedAmps is null != (calibration.ShortedVolts is null))
            {
                faults.Add(new Fault($"{key}.calibration", null, "shortedAmps and shortedVolts belong together: give both or neither"));
                return;
            }

            if (calibration.DimAmps is null != (calibration.DimVolts is null))
            {
                faults.Add(new Fault($"{key}.calibration", null, "dimAmps and dimVolts belong together: give both or neither"));
                return;
            }
        }

        Try(key, lamp.Name, () => Inventory.Lamp(lamp), faults);
    }

    private static void CheckBench(BenchOptions bench, string key, LampwardenOptions options, LampInventory? inventory, List<Fault> faults)
    {
        // A faulty mains must not hide a faulty bank: they are read as for another mains then.
        var mains = new Mains(230, 50);
        Try($"{key}.mains", bench.Mains, () => mains = Mains.Parse(bench.Mains), faults);
        // With a faulty inventory the names in a bank text cannot be judged; the lamp's own fault is enough.
        if (inventory is not null || !options.Lamps.Any(lamp => lamp.Name.Length > 0 && bench.Bank.Contains(lamp.Name, StringComparison.Ordinal)))
        {
            Try($"{key}.bank", bench.Bank, () => Bank.Parse(bench.Bank, mains, inventory), faults);
        }

        Try($"{key}.unit", bench.Unit, () => Unit.Parse(bench.Unit, mains), faults);

        CheckUnique(bench.Meters.Select(meter => meter.Name), $"{key}.meters", faults);
        var lineMeters = bench.Meters.Count(meter => meter.Quantity == Quantity.LineCurrent);
        if (lineMeters != 1)
        {
            faults.Add(new Fault($"{key}.meters", null, $"exactly one meter must measure lineCurrent; {lineMeters} do"));
        }

        if (bench.Meters.Count(meter => meter.Quantity == Quantity.MainsVoltage) > 1)
        {
            faults.Add(new Fault($"{key}.meters", null, "at most one meter may measure mainsVoltage"));
        }

        for (var index = 0; index < bench.Meters.Count; index++)
        {
            CheckMeter(bench.Meters[index], string.Create(CultureInfo.InvariantCulture, $"{key}.meters[{index}]"), faults);
        }
    }

    private static void CheckMeter(MeterOptions meter, string key, List<Fault> faults)
    {
        foreach (var fault in MeterRules.Faults(meter))
        {
            Add($"{key}.{fault.Key}", fault.Value, fault.Rule, faults);
        }
    }

    private static void CheckUnique(IEnumerable<string> names, string key, List<Fault> faults)
    {
        foreach (var twice in names.GroupBy(name => name, StringComparer.OrdinalIgnoreCase).Where(group => group.Key.Length > 0 && group.Count() > 1))
        {
            Add($"{key}.name", twice.Key, $"the name stands {twice.Count()} times; names must differ", faults);
        }
    }

    private static void Try(string key, string? value, Action action, List<Fault> faults)
    {
        if (faults.Exists(fault => fault.Key == key))
        {
            return;
        }

        try
        {
            action();
        }
        catch (Exception error) when (error is FormatException or ArgumentException)
        {
            faults.Add(new Fault(key, value, error.Message.Replace("\n", "\n    ", StringComparison.Ordinal)));
        }
    }

    private static void Add(string key, string? value, string rule, List<Fault> faults)
    {
        if (!faults.Exists(fault => fault.Key == key))
        {
            faults.Add(new Fault(key, value, rule));
        }
    }
}
