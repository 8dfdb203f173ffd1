namespace Lampwarden.Simulator.Instruments;

/// <summary>A simulated meter: its language, its pace and how far it is from the truth.</summary>
public sealed class SimulatedMeterOptions
{
    /// <summary>scpi (waits for questions), or a free-running one: words, fields or columns (see <see cref="LineDialect"/>).</summary>
    public string Dialect { get; set; } = "scpi";

    /// <summary>Free-running dialects: lines a simulated second.</summary>
    public double LinesPerSecond { get; set; } = 4;

    /// <summary>Answer to *IDN?: an instrument of our own invention.</summary>
    public string Identity { get; set; } = "Gantry Mill,Wicket 4,000117,1.2";

    /// <summary>What it measures from power-on.</summary>
    public MeasuredQuantity Quantity { get; set; } = MeasuredQuantity.LineCurrent;

    /// <summary>What MEASure:RESistance? finds between its leads, in ohms; NaN for a meter without that function.</summary>
    public double ResistanceOhms { get; set; } = double.NaN;

    /// <summary>Length of its measuring window in seconds of simulated time.</summary>
    public double WindowSeconds { get; set; } = 0.2;

    /// <summary>Simulated seconds from question to answer; 0 answers at once with the window that has just ended.</summary>
    public double MeasuringSeconds { get; set; }

    /// <summary>Smallest step it shows, in A, for currents.</summary>
    public double CurrentCountSize { get; set; } = 0.0001;

    /// <summary>Smallest step it shows, in V, for voltages.</summary>
    public double VoltageCountSize { get; set; } = 0.01;

    /// <summary>Current in A above which it shows overload, when no smaller range is set.</summary>
    public double CurrentRange { get; set; } = 10;

    /// <summary>Voltage in V above which it shows overload, when no smaller range is set.</summary>
    public double VoltageRange { get; set; } = 750;

    /// <summary>Share by which it reads too high, such as 0.004; the watcher is not told.</summary>
    public double GainError { get; set; }

    /// <summary>Standard deviation of its noise in counts; the watcher is not told.</summary>
    public double NoiseCounts { get; set; } = 1;

    /// <summary>Seed of its noise.</summary>
    public int Seed { get; set; } = 1;

    /// <summary>Sends every command back before answering it.</summary>
    public bool Echo { get; set; }

    /// <summary>What ends its lines.</summary>
    public string Terminator { get; set; } = "\n";

    /// <summary>What goes wrong with it, by itself, in simulated time. More can be begun by hand: <see cref="SimulatedMeter.Begin"/>.</summary>
    public IList<ScheduledTrouble> Troubles { get; set; } = [];
}
