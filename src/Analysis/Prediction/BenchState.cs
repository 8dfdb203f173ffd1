using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Tungsten;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

/// <summary>One bank with one unit worked out: the steady point, if there is one, and the switch-on at the worst phase.</summary>
internal sealed class BenchState
{
    private const double LongestSeconds = 20;
    private const double DroppingSeconds = 3;
    private const double MotorStartSeconds = 6;
    private const double TurningSpeed = 0.5;

    private readonly Bank bank;

    public BenchState(Mains mains, Bank bank, Unit unit, PredictionSettings settings, BenchInputs inputs, BenchInputs joined)
    {
        this.bank = bank;
        var response = unit.NewResponse(mains);
        if (response is MotorResponse motor)
        {
            motor.IsLocked = !Turns(mains, bank, unit, settings.SourceOhms);
        }

        var solver = new SteadySolver(bank, response, settings.SourceOhms);
        Exists = solver.TrySolve(mains.Volts, out var point);
        Point = point;
        var willGlow = new bool[bank.Lamps.Count];
        if (Exists)
        {
            var bankOhms = point.Amps > 1e-9 ? solver.Bank.BankVolts / point.Amps : bank.ColdOhms;
            Evaluator = new SteadyEvaluator(mains, bank, unit, response, point, bankOhms, settings.SourceOhms, inputs);
            JoinedEvaluator = new SteadyEvaluator(mains, bank, unit, response, point, bankOhms, settings.SourceOhms, joined);
            Steady = Evaluator.At(inputs.Nominal);
            for (var lamp = 0; lamp < willGlow.Length; lamp++)
            {
                willGlow[lamp] = Steady[SteadyEvaluator.FirstLamp + SteadyEvaluator.PerLamp * lamp + 3] > TungstenProperties.FirstGlowKelvin;
            }
        }

        Note = MakeNote(mains, unit, settings, solver, response, ref point);
        Exists &= response is not MotorResponse { IsLocked: true };
        Point = point;
        var (phase, _) = SwitchOn.WorstPhase(mains, bank, unit, settings.SourceOhms);
        Transients = new TransientEvaluator(mains, joined, settings, phase, Exists ? LongestSeconds : DroppingSeconds, willGlow, unit);
        Transient = Transients.Run(joined.Nominal, point.Amps);
        TransientNumbers = Transients.Numbers(Transient, point.Amps);
    }

    /// <summary>False where the bank cannot run the unit.</summary>
    public bool Exists { get; }

    public UnitPoint Point { get; }

    public string? Note { get; }

    /// <summary>Numbers as <see cref="SteadyEvaluator"/> orders them; empty where there is no steady state.</summary>
    public double[] Steady { get; } = [];

    public SteadyEvaluator? Evaluator { get; }

    public SteadyEvaluator? JoinedEvaluator { get; }

    public TransientEvaluator Transients { get; }

    public SwitchOn Transient { get; }

    public double[] TransientNumbers { get; }

    /// <summary>Every lamp as the prediction shows it.</summary>
    public IReadOnlyList<LampState> Lamps() => [.. bank.Lamps.Select((lamp, index) =>
    {
        if (Steady.Length == 0)
        {
            return new LampState(lamp.Name, double.NaN, double.NaN, double.NaN, double.NaN, double.NaN, Transient.FirstGlowSeconds[index]);
        }

        var numbers = Steady.AsSpan(SteadyEvaluator.FirstLamp + SteadyEvaluator.PerLamp * index, SteadyEvaluator.PerLamp);
        return new LampState(lamp.Name, numbers[0], numbers[1], numbers[2], numbers[3], numbers[4], Transient.FirstGlowSeconds[index]);
    })];

    /// <summary>Whether a motor gets up to speed from standstill with a cold bank.</summary>
    public static bool Turns(Mains mains, Bank bank, Unit unit, double sourceOhms)
    {
        var simulation = new CircuitSimulation(mains, bank, unit, sourceOhms: sourceOhms);
        while (simulation.Seconds < MotorStartSeconds && simulation.UnitState[2] < TurningSpeed)
        {
            simulation.Step();
        }

        return simulation.UnitState[2] >= TurningSpeed;
    }

    private string? MakeNote(
        Mains mains, Unit unit, PredictionSettings settings, SteadySolver solver, UnitResponse response, ref UnitPoint point)
    {
        if (response is MotorResponse { IsLocked: true })
        {
            var note = PredictionNotes.Locked(point.Amps);
            point = UnitPoint.None;
            return note;
        }

        if (solver.ConstantPower is not { } constantPower)
        {
            return null;
        }

        var shorted = new BankSolver(bank).Feed(mains.Volts, settings.SourceOhms);
        var switchMode = (SwitchModeUnit)unit;
        return Exists
            ? PredictionNotes.Running(constantPower, mains.Volts, shorted, switchMode.ConverterWatts)
            : PredictionNotes.Dropping(constantPower, mains.Volts, shorted, switchMode, Hiccup.Of(mains, bank, switchMode, settings.SourceOhms));
    }
}
