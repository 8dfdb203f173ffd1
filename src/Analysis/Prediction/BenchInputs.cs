using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Uncertainty;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

/// <summary>
/// Everything about a bench that is not exactly known, as a list of inputs; and the bench that one set of their values makes. Equal lamps
/// that are neighbours in one series or parallel part can be taken as one input for their mean, which is exact to first order.
/// </summary>
internal sealed class BenchInputs
{
    private readonly Mains mains;
    private readonly Bank bank;
    private readonly Unit unit;
    private readonly List<UncertainInput> inputs = [];
    private readonly List<Target> targets = [];

    public BenchInputs(Mains mains, Bank bank, Unit unit, PredictionSettings settings, bool joinEqualLamps = false)
    {
        (this.mains, this.bank, this.unit) = (mains, bank, unit);
        Add(UncertainInput.Normal("mains voltage", 1, settings.MainsUncertainty), Kind.Mains, []);
        var unitSigma = double.IsNaN(settings.UnitUncertainty) ? unit.DefaultUncertainty : settings.UnitUncertainty;
        Add(UncertainInput.Normal("unit", 1, unitSigma), Kind.Unit, []);
        Add(UncertainInput.Normal("room temperature", 0, settings.RoomUncertaintyKelvin), Kind.Room, []);
        foreach (var group in Groups(bank, joinEqualLamps))
        {
            AddLamps(bank.Lamps[group[0]], group);
        }

        Nominal = [.. inputs.Select(input => input.Nominal)];
    }

    private enum Kind
    {
        Mains,
        Unit,
        Room,
        Watts,
        Hot,
        Gas,
        Lead,
        Coil,
    }

    /// <summary>The inputs.</summary>
    public IReadOnlyList<UncertainInput> Inputs => inputs;

    /// <summary>Their values in the prediction itself.</summary>
    public double[] Nominal { get; }

    /// <summary>True for an input that only a transient feels: the coil factor.</summary>
    public bool IsTransientOnly(int input) => targets[input].Kind is Kind.Coil or Kind.Room;

    /// <summary>Mains volts of a set of values.</summary>
    public double MainsVolts(ReadOnlySpan<double> values) => mains.Volts * values[0];

    /// <summary>Factor on the unit's watts.</summary>
    public static double UnitFactor(ReadOnlySpan<double> values) => values[1];

    /// <summary>The unit of a set of values.</summary>
    public Unit UnitOf(ReadOnlySpan<double> values) => Scaled(unit, values);

    /// <summary>Any unit, with its rating as a set of values has it.</summary>
    public static Unit Scaled(Unit unit, ReadOnlySpan<double> values) => values[1] == 1 ? unit : unit.Scaled(values[1]);

    /// <summary>Temperature of the cold lamps.</summary>
    public double RoomKelvin(ReadOnlySpan<double> values) =>
        (bank.Lamps.FirstOrDefault(lamp => lamp.Filament is not null)?.Filament!.AmbientKelvin ?? Lamp.RoomKelvin) + values[2];

    /// <summary>The bank of a set of values.</summary>
    public Bank BankOf(ReadOnlySpan<double> values) => bank.With(LampsOf(values));

    /// <summary>The lamps of a set of values, in the bank's order.</summary>
    public IReadOnlyList<Lamp> LampsOf(ReadOnlySpan<double> values)
    {
        var lamps = bank.Lamps.ToArray();
        for (var input = 0; input < targets.Count; input++)
        {
            if (values[input] == Nominal[input])
            {
                continue;
            }

            foreach (var lamp in targets[input].Lamps)
            {
                lamps[lamp] = Moved(lamps[lamp], targets[input].Kind, values[input]);
            }
        }

        return lamps;
    }

    private static Lamp Moved(Lamp lamp, Kind kind, double value) => lamp.Filament is not { } filament
        ? lamp.WithOhms(lamp.ResistorOhms / value)
        : lamp.With(kind switch
        {
            Kind.Watts => filament with { Watts = filament.Watts * value },
            Kind.Hot => filament with { HotKelvin = value },
            Kind.Gas => filament with { GasShare = value },
            Kind.Lead => filament with { LeadShare = value },
            Kind.Coil => filament with { CoilFactor = filament.CoilFactor * value },
            _ => filament,
        });

    private static IEnumerable<int[]> Groups(Bank bank, bool join)
    {
        var network = bank.Network;
        var places = Enumerable.Range(0, network.Leaf.Length).Where(node => network.Leaf[node] >= 0)
            .Select(node => (Lamp: network.Leaf[node], Parent: join ? network.Parent[node] : node));
        return places.GroupBy(place => (place.Parent, bank.Lamps[place.Lamp].Filament)).Select(group => group.Select(place => place.Lamp).ToArray());
    }

    private void AddLamps(Lamp lamp, int[] group)
    {
        var tolerance = lamp.Tolerance;
        var name = lamp.Name;

        // The mean of n equal, independent lamps is known better by the root of n.
        var share = 1 / Math.Sqrt(group.Length);
        Add(UncertainInput.Normal($"watts of {name}", 1, tolerance.WattsShare * share), Kind.Watts, group);
        if (lamp.Filament is { } filament)
        {
            Add(UncertainInput.Normal($"filament temperature of {name}", filament.HotKelvin, tolerance.HotKelvin * share), Kind.Hot, group);
            Add(Between($"gas loss of {name}", filament.GasShare, tolerance.GasLow, tolerance.GasHigh), Kind.Gas, group);
            Add(Between($"lead loss of {name}", filament.LeadShare, tolerance.LeadLow, tolerance.LeadHigh), Kind.Lead, group);
            Add(UncertainInput.Normal($"coil factor of {name}", 1, tolerance.CoilShare * share), Kind.Coil, group);
        }

        UncertainInput Between(string text, double nominal, double low, double high) => group.Length == 1
            ? UncertainInput.Between(text, nominal, low, high)
            : new UncertainInput(text, nominal, 0.5 * (low + high), (high - low) / Math.Sqrt(12) * share, InputShape.Normal);
    }

    private void Add(UncertainInput input, Kind kind, int[] lamps)
    {
        if (input.Sigma > 0)
        {
            inputs.Add(input);
            targets.Add(new Target(kind, lamps));
        }
        else if (kind is Kind.Mains or Kind.Unit or Kind.Room)
        {
            // These three keep their places.
            inputs.Add(input);
            targets.Add(new Target(kind, []));
        }
    }

    private readonly record struct Target(Kind Kind, int[] Lamps);
}
