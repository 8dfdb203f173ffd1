using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Tungsten;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

/// <summary>
/// Mains, bank and unit in time: every filament's temperature (equation 8) and the unit's own states by fixed-step Runge-Kutta of
/// fourth order, 100 steps to a cycle, or a multiple of that for a unit that moves quicker. A step allocates nothing. Not thread-safe.
/// </summary>
public sealed partial class CircuitSimulation
{
    /// <summary>Least steps in one mains cycle: RMS currents are then within 0.01 % of a finer division (docs/model.md).</summary>
    public const int LeastStepsPerCycle = 100;

    private const int MostStepsPerCycle = 5000;

    private const double OpenSiemens = 1e-12;

    private readonly FilamentGrid grid;
    private readonly Node[] nodes;
    private readonly LampInstant[] lamps;
    private readonly double sourceOhms;

    // Work space: temperatures and rates of the four stages, joined conductances, volts.
    private readonly double[] kelvin;
    private readonly double[] stageKelvin;
    private readonly double[][] kelvinRates;
    private readonly double[] nodeSiemens;
    private readonly double[] nodeVolts;
    private readonly double[] sums;

    private readonly Mains mains;
    private readonly double leastOhms;
    private readonly double mostOhms;
    private double[] sine = [];
    private double phaseDegrees;
    private double stepSeconds;
    private UnitDynamics unit;
    private double[] state;
    private double[] stageState;
    private double[][] stateRates;
    private long steps;
    private int startIndex;
    private double startSeconds;
    private double peakVolts;
    private bool isFresh;

    /// <param name="mains">The supply; its volts can be changed later.</param>
    /// <param name="bank">The limiter.</param>
    /// <param name="unit">What stands behind it, off for long.</param>
    /// <param name="phaseDegrees">Where in the cycle the switch closes: 0 at the upward zero, 90 at the positive peak.</param>
    /// <param name="startKelvin">Filament temperatures at that moment; null or NaN for a cold one.</param>
    /// <param name="sourceOhms">Resistance of the supply itself, 0 or more.</param>
    public CircuitSimulation(
        Mains mains, Bank bank, Unit unit, double phaseDegrees = 0, IReadOnlyList<double>? startKelvin = null, double sourceOhms = 0)
    {
        (this.mains, Bank, MainsVolts, this.sourceOhms) = (mains, bank, mains.Volts, sourceOhms);
        var network = bank.Network;
        grid = FilamentGrid.At(network.Lamps.FirstOrDefault(lamp => lamp.Filament is not null)?.Filament!.AmbientKelvin ?? Lamp.RoomKelvin);
        lamps = [.. network.Lamps.Select(MakeLamp)];
        nodes = [.. network.Parent.Select((parent, node) =>
            new Node(network.Leaf[node], parent, network.IsParallel[node], parent >= 0 && network.IsParallel[parent]))];
        leastOhms = sourceOhms + bank.ColdOhms;
        mostOhms = sourceOhms + MostOhms(bank.Root);
        this.phaseDegrees = phaseDegrees;
        kelvin = new double[lamps.Length];
        stageKelvin = new double[lamps.Length];
        kelvinRates = MakeRates(lamps.Length);
        nodeSiemens = new double[nodes.Length];
        nodeVolts = new double[nodes.Length];
        sums = new double[nodes.Length];
        (unitModel, this.unit, state, stageState, stateRates) = (unit, unit.NewDynamics(mains), [], [], []);
        TakeUnit(unit);
        Reset(phaseDegrees, startKelvin);
    }

    /// <summary>The limiter.</summary>
    public Bank Bank { get; }

    /// <summary>Seconds since the switch closed.</summary>
    public double Seconds => startSeconds + steps * stepSeconds;

    /// <summary>Steps in one mains cycle with this unit.</summary>
    public int StepsPerCycle => sine.Length / 2;

    /// <summary>Length of one step in seconds.</summary>
    public double StepSeconds => stepSeconds;

    /// <summary>RMS of the supply from now on.</summary>
    public double MainsVolts
    {
        get;
        set
        {
            field = value;
            peakVolts = Math.Sqrt(2) * value;
            isFresh = false;
        }
    }

    /// <summary>A fault resistance across the unit's terminals, in ohms; infinity where there is none.</summary>
    public double FaultOhms
    {
        get;
        set
        {
            field = value;
            isFresh = false;
        }
    } = double.PositiveInfinity;

    /// <summary>Line current at this instant.</summary>
    public double LineAmps
    {
        get
        {
            Refresh();
            return field;
        }
        private set;
    }

    /// <summary>Volts across the unit at this instant.</summary>
    public double UnitVolts
    {
        get
        {
            Refresh();
            return field;
        }
        private set;
    }

    /// <summary>Supply at this instant.</summary>
    public double SourceVolts => peakVolts * sine[SineIndex(0)];

    /// <summary>Temperature of each filament in kelvin; for a plain resistor the temperature of the room.</summary>
    public ReadOnlySpan<double> FilamentKelvin => kelvin;

    /// <summary>The unit's own states, as its model orders them.</summary>
    internal ReadOnlySpan<double> UnitState => state;

    /// <summary>Starts again at a phase, with these filament temperatures and a unit that has been off for long.</summary>
    public void Reset(double phaseDegrees, IReadOnlyList<double>? startKelvin = null)
    {
        (steps, startSeconds, isFresh, startIndex) = (0, 0, false, 0);
        this.phaseDegrees = phaseDegrees;
        FillSine();

        for (var lamp = 0; lamp < kelvin.Length; lamp++)
        {
            var given = startKelvin is null ? double.NaN : startKelvin[lamp];
            kelvin[lamp] = double.IsNaN(given) ? grid.AmbientKelvin : given;
        }

        unit.Rest(state);
    }

    /// <summary>Puts another unit behind the bank, which keeps its temperatures. A model of the same kind keeps its own states too.</summary>
    public void ReplaceUnit(Unit unit) => TakeUnit(unit);

    /// <summary>Burns a lamp out, or switches it off; or puts it back in.</summary>
    public void SetLampOut(int lamp, bool isOut)
    {
        lamps[lamp].IsOut = isOut;
        isFresh = false;
    }

    /// <summary>One step of a hundredth of a cycle.</summary>
    public void Step()
    {
        Refresh();
        var half = 0.5 * stepSeconds;
        Stage(kelvinRates[0], stateRates[0], half, 1, 1);
        Stage(kelvinRates[1], stateRates[1], half, 1, 2);
        Stage(kelvinRates[2], stateRates[2], stepSeconds, 2, 3);
        Combine(kelvin, kelvinRates);
        Combine(state, stateRates);
        unit.EndStep(state);
        steps++;
        isFresh = false;
    }

    /// <summary>Steps for a time, to the nearest whole step, and gives the true RMS line current over it.</summary>
    public double Run(double seconds)
    {
        var count = Math.Max(1, (long)Math.Round(seconds / stepSeconds));
        var last = LineAmps * LineAmps;
        var sum = 0.0;
        for (long step = 0; step < count; step++)
        {
            Step();
            var next = LineAmps * LineAmps;
            sum += 0.5 * (last + next);
            last = next;
        }

        return Math.Sqrt(sum / count);
    }

    private LampInstant MakeLamp(Lamp lamp) => new()
    {
        HasFilament = lamp.Filament is not null,
        Filament = lamp.Filament is null ? default : new FilamentCoefficients(lamp.Filament, grid),
        Siemens = lamp.Filament is null ? 1 / lamp.ResistorOhms : 0,
    };

    // Hot, and with all but the weakest branch of every parallel part burnt out.
    private static double MostOhms(BankPart part) => part switch
    {
        LampPart leaf => leaf.Lamp.Filament?.HotOhms ?? leaf.Lamp.ResistorOhms,
        SeriesPart series => series.Parts.Sum(MostOhms),
        ParallelPart parallel => parallel.Parts.Max(MostOhms),
        _ => 0,
    };

    private static double[][] MakeRates(int length) => [new double[length], new double[length], new double[length], new double[length]];

    private int SineIndex(int halfStepsAhead) => (int)((startIndex + 2 * steps + halfStepsAhead) % sine.Length);

    private void TakeUnit(Unit next)
    {
        var keeps = stateRates.Length > 0 && unitModel.GetType() == next.GetType();
        unitModel = next;
        unit = next.NewDynamics(mains);
        if (!keeps || state.Length != unit.StateCount)
        {
            (state, stageState, stateRates) = (new double[unit.StateCount], new double[unit.StateCount], MakeRates(unit.StateCount));
            unit.Rest(state);
        }

        response = null;
        isFresh = false;
        var multiple = Math.Ceiling(1 / (unit.LongestStepSeconds(leastOhms, mostOhms) * mains.Hertz * LeastStepsPerCycle));
        var perCycle = (int)Math.Clamp(multiple * LeastStepsPerCycle, LeastStepsPerCycle, MostStepsPerCycle);
        if (perCycle == StepsPerCycle)
        {
            return;
        }

        // The place in the cycle is kept, to the nearest step.
        var place = sine.Length == 0 ? 0 : SineIndex(0) / (double)sine.Length;
        startSeconds = Seconds;
        steps = 0;
        sine = new double[2 * perCycle];
        startIndex = 2 * (int)Math.Round(place * perCycle);
        stepSeconds = 1 / (mains.Hertz * perCycle);
        FillSine();
    }

    private void FillSine()
    {
        for (var half = 0; half < sine.Length; half++)
        {
            sine[half] = Math.Sin(2 * Math.PI * half / sine.Length + phaseDegrees * Math.PI / 180);
        }
    }

    private void Refresh()
    {
        if (!isFresh)
        {
            isFresh = true;
            LineAmps = Rates(SineIndex(0), kelvin, kelvinRates[0], state, stateRates[0]);
            UnitVolts = SourceVolts - LineAmps * (sourceOhms + 1 / nodeSiemens[^1]);
        }
    }

    private void Stage(double[] fromKelvin, double[] fromState, double seconds, int halfSteps, int into)
    {
        for (var lamp = 0; lamp < stageKelvin.Length; lamp++)
        {
            stageKelvin[lamp] = kelvin[lamp] + seconds * fromKelvin[lamp];
        }

        for (var index = 0; index < stageState.Length; index++)
        {
            stageState[index] = state[index] + seconds * fromState[index];
        }

        Rates(SineIndex(halfSteps), stageKelvin, kelvinRates[into], stageState, stateRates[into]);
    }

    private void Combine(double[] values, double[][] rates)
    {
        var sixth = stepSeconds / 6;
        for (var index = 0; index < values.Length; index++)
        {
            values[index] += sixth * (rates[0][index] + 2 * (rates[1][index] + rates[2][index]) + rates[3][index]);
        }
    }
}
