using Lampwarden.Simulator.Benches;
using Lampwarden.Simulator.Instruments;
using MeterTrouble = Lampwarden.Simulator.Instruments.MeterTrouble;

namespace Lampwarden.Benchmarks.Unattended.Haul;

/// <summary>What can go wrong in a shift of the long haul.</summary>
/// <param name="Name">A kind of <see cref="ScenarioFault"/> or <see cref="MeterTrouble"/> in kebab-case, or none.</param>
/// <param name="Wanted">One of these names must come; empty: nothing may be said but notices, for the service must get over it.</param>
/// <param name="MainsMeasured">Whether the bench has a meter on the mains.</param>
/// <param name="May">What may come and need not.</param>
/// <param name="Talking">Wanted where the meter talks by itself and is not asked; null: as <paramref name="Wanted"/>.</param>
internal sealed record HaulFault(string Name, string[] Wanted, bool MainsMeasured = false, string? May = null, string[]? Talking = null)
{
    /// <summary>Every fault of the bench and every trouble of the meter that the simulator knows, and two shifts without any.</summary>
    public static readonly HaulFault[] Catalogue =
    [
        new("none", []),
        new("hard-short", ["hard-short"]),
        new("developing-short", ["developing-short", "hard-short", "runaway"]),
        new("open", ["open-circuit"]),
        new("intermittent", ["intermittent", "cycling"]),
        new("cycling", ["intermittent", "cycling"]),
        new("lamp-out", ["lamp-out"]),
        // Without a meter on the mains nobody can tell it from a change of the unit: either name is right.
        new("mains-step", ["mains-shift", "off-prediction"]),
        new("mains-step", ["mains-shift"], MainsMeasured: true),
        new("meter-unplugged", ["meter-silent"]),
        new("silent", ["meter-silent"]),
        new("garbled", ["meter-silent"]),
        new("none", [], MainsMeasured: true),
        new("half-lines", ["meter-silent"]),
        new("stuck", ["meter-stuck"]),
        // One that talks by itself is then a line behind, and does no harm.
        new("late", ["meter-silent"], Talking: []),
        // Half the lines are spoilt, and after each the meter is asked who it is: few readings or none.
        new("nuls", ["meter-silent"], Talking: []),
        // Off for the whole time, and back with its settings lost.
        new("restarted", ["meter-silent"]),
        // A number a moment that nobody asked for: readings or gaps, but nothing made of wrong numbers.
        new("babbling", [], May: "meter-silent"),
        // A megabyte takes as long to come as the wire needs, and this clock does not wait for it.
        new("endless", [], May: "meter-silent"),
        new("split", []),
        new("glued", []),
    ];

    private static readonly string[] Units = ["resistor 700 ohm", "resistor 1500 ohm", "resistor 300 ohm"];
    private static readonly string[] Dialects = ["scpi", "words", "scpi", "fields", "scpi", "columns"];

    private const double MinutesOfTrouble = 5;
    private const double MinutesOfContact = 30;

    /// <summary>How the table calls it.</summary>
    public string Label => MainsMeasured ? Name + ", mains measured" : Name;

    /// <summary>The fault of a bench's run, counted from 0 through all shifts.</summary>
    public static HaulFault Of(int number) => Catalogue[number % Catalogue.Length];

    /// <summary>What must come of it, where the meter speaks so.</summary>
    public string[] WantedOf(string dialect) => dialect == "scpi" ? Wanted : Talking ?? Wanted;

    /// <summary>The bench on which it strikes; each time through the catalogue with another kind of unit and of meter.</summary>
    /// <param name="number">Of the run.</param>
    /// <param name="atSeconds">When.</param>
    /// <param name="perSecond">Readings a second.</param>
    public Scenario Script(int number, double atSeconds, double perSecond)
    {
        var time = number / Catalogue.Length;
        var scenario = new Scenario
        {
            Name = "haul", Mains = "230 V 50 Hz", Bank = "100 W || 100 W", Unit = Units[time % Units.Length],
            SwitchOnSeconds = 1, EndSeconds = 60_000, Seed = number + 1, MainsMeasured = MainsMeasured,
        };
        scenario.Meter.ReadingsPerSecond = perSecond;
        scenario.Meter.Dialect = MainsMeasured ? "scpi" : Dialects[time % Dialects.Length];
        if (Enum.TryParse<MeterTrouble>(Name.Replace("-", "", StringComparison.Ordinal), ignoreCase: true, out var trouble))
        {
            scenario.Meter.Troubles.Add(new ScheduledTrouble { Kind = trouble, AtSeconds = atSeconds, ForSeconds = MinutesOfTrouble * 60 });
        }
        else if (Name != "none")
        {
            scenario.Faults.Add(new ScenarioFault
            {
                Kind = Name, AtSeconds = atSeconds, Minutes = 30, Percent = -12, Lamp = 1,
                ForSeconds = Name == "meter-unplugged" ? MinutesOfTrouble * 60 : MinutesOfContact * 60,
                EverySeconds = 90, OutSeconds = 12,
            });
        }

        return scenario;
    }
}
