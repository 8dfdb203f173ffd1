using System.ComponentModel.DataAnnotations;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Simulator.Benches;

/// <summary>A bench that is not there and what will happen on it. Files lie in config/scenarios.</summary>
public sealed class Scenario
{
    /// <summary>Short name, as in the file's name.</summary>
    [Required]
    public string Name { get; set; } = "";

    /// <summary>What happens, in a sentence or two, for the reader of a rehearsal.</summary>
    public string About { get; set; } = "";

    /// <summary>Mains text.</summary>
    [Required]
    public string Mains { get; set; } = "";

    /// <summary>Bank text.</summary>
    [Required]
    public string Bank { get; set; } = "";

    /// <summary>Unit text.</summary>
    [Required]
    public string Unit { get; set; } = "";

    /// <summary>Seed of every random thing in the bench; the same seed gives the same bench.</summary>
    public int Seed { get; set; } = 1;

    /// <summary>Simulated seconds from start to the closing of the run; 5 to 3,000,000.</summary>
    [Range(5.0, 3e6)]
    public double EndSeconds { get; set; } = 600;

    /// <summary>Simulated seconds at which mains is switched on; 0 to 3600.</summary>
    [Range(0.0, 3600.0)]
    public double SwitchOnSeconds { get; set; } = 2;

    /// <summary>How many times faster than life a rehearsal runs unless --speed says otherwise; 0.1 to 1000.</summary>
    [Range(0.1, 1000.0)]
    public double Speed { get; set; } = 20;

    /// <summary>What the watcher is not told.</summary>
    public HiddenTruth Truth { get; set; } = new();

    /// <summary>The line-current meter.</summary>
    public ScenarioMeter Meter { get; set; } = new();

    /// <summary>Whether a second meter measures the mains.</summary>
    public bool MainsMeasured { get; set; }

    /// <summary>What goes wrong, in order of time.</summary>
    public IList<ScenarioFault> Faults { get; set; } = [];

    /// <summary>What the watch must find for the rehearsal to count as good.</summary>
    public ScenarioExpectation Expect { get; set; } = new();
}

/// <summary>How the real bench differs from its nameplates.</summary>
public sealed class HiddenTruth
{
    /// <summary>Standard deviation of each lamp's watts from its rating, percent; 0 to 20.</summary>
    [Range(0.0, 20.0)]
    public double LampSpreadPercent { get; set; } = 2;

    /// <summary>Standard deviation of the unit's resistance from its nameplate, percent; 0 to 50.</summary>
    [Range(0.0, 50.0)]
    public double UnitSpreadPercent { get; set; } = 1;

    /// <summary>Standard deviation of the slow mains wander, percent; 0 to 10.</summary>
    [Range(0.0, 10.0)]
    public double MainsWanderPercent { get; set; } = 0.4;

    /// <summary>The unit's current when cold differs from warm by this many percent; -30 to 30.</summary>
    [Range(-30.0, 30.0)]
    public double WarmUpPercent { get; set; }

    /// <summary>Time constant of that warm-up in minutes; 0.1 to 300.</summary>
    [Range(0.1, 300.0)]
    public double WarmUpMinutes { get; set; } = 10;
}

/// <summary>The simulated line-current meter.</summary>
public sealed class ScenarioMeter
{
    /// <summary>Readings a second; 0.1 to 100.</summary>
    [Range(0.1, 100.0)]
    public double ReadingsPerSecond { get; set; } = 2;

    /// <summary>Measuring window in seconds; 0.001 to 10.</summary>
    [Range(0.001, 10.0)]
    public double WindowSeconds { get; set; } = 0.2;

    /// <summary>Noise of one reading, percent of reading (standard deviation); 0 to 10.</summary>
    [Range(0.0, 10.0)]
    public double NoisePercent { get; set; } = 0.1;

    /// <summary>A constant error of the meter, percent of reading; -10 to 10.</summary>
    [Range(-10.0, 10.0)]
    public double GainErrorPercent { get; set; }

    /// <summary>Size of a count in A; 1e-6 to 1.</summary>
    [Range(1e-6, 1.0)]
    public double CountSize { get; set; } = 0.0001;

    /// <summary>Largest current the range takes, in A; beyond it the meter answers overload.</summary>
    [Range(0.001, 1000.0)]
    public double RangeAmps { get; set; } = 10;

    /// <summary>Its language: scpi, or one of the free-running dialects words, fields, columns.</summary>
    [AllowedValues("scpi", "words", "fields", "columns")]
    public string Dialect { get; set; } = "scpi";

    /// <summary>It sends every command back before it answers.</summary>
    public bool Echo { get; set; }

    /// <summary>What goes wrong with it and its cable: a kind of <see cref="MeterTrouble"/> in kebab-case, when and for how long.</summary>
    public IList<ScheduledTrouble> Troubles { get; set; } = [];
}

/// <summary>Something that goes wrong at a time.</summary>
public sealed class ScenarioFault
{
    /// <summary>Simulated seconds since the start.</summary>
    [Range(0.0, 3e6)]
    public double AtSeconds { get; set; }

    /// <summary>hard-short, developing-short, open, intermittent, cycling, lamp-out, mains-step, meter-unplugged.</summary>
    [AllowedValues("hard-short", "developing-short", "open", "intermittent", "cycling", "lamp-out", "mains-step", "meter-unplugged")]
    public string Kind { get; set; } = "";

    /// <summary>developing-short: minutes in which the unit's resistance falls to 37 %; 0.05 to 3000.</summary>
    [Range(0.05, 3000.0)]
    public double Minutes { get; set; } = 10;

    /// <summary>intermittent, cycling: simulated seconds from one drop-out of the unit to the next (intermittent: on average); 0.1 to 36,000.</summary>
    [Range(0.1, 36_000.0)]
    public double EverySeconds { get; set; } = 60;

    /// <summary>intermittent, cycling: simulated seconds a drop-out lasts; 0.02 to 3600.</summary>
    [Range(0.02, 3600.0)]
    public double OutSeconds { get; set; } = 2;

    /// <summary>meter-unplugged: simulated seconds until it is plugged in again; intermittent, cycling: until it is over; 0 for never.</summary>
    [Range(0.0, 3e6)]
    public double ForSeconds { get; set; }

    /// <summary>mains-step: percent by which mains changes for good; -50 to 30.</summary>
    [Range(-50.0, 30.0)]
    public double Percent { get; set; }

    /// <summary>lamp-out: which lamp of the bank text, counted from 1.</summary>
    [Range(1, 64)]
    public int Lamp { get; set; } = 1;
}

/// <summary>What must come out of a rehearsal of the scenario.</summary>
public sealed class ScenarioExpectation
{
    /// <summary>Signatures that must be found; an empty list for a scenario in which nothing may be; null for no rule.</summary>
    public IList<string>? Findings { get; set; }

    /// <summary>The verdict that must come; null for any.</summary>
    [AllowedValues(null, "passed", "failed", "incomplete")]
    public string? Verdict { get; set; }

    /// <summary>The first expected finding must be raised while the current is below this share of the shorted current; 0 to 1, 1 for no rule.</summary>
    [Range(0.0, 1.0)]
    public double RaisedBelowShareOfShorted { get; set; } = 1;
}
