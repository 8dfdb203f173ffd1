using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Simulator.Benches;

/// <summary>
/// A bench that is not there: lamps that differ from their nameplates, mains that wanders, a unit with scripted faults.
/// Asked for a time, it goes on until then: by waveform for the first seconds after each jolt, by RMS values while all is calm.
/// Thread-safe: several meters ask it at once.
/// </summary>
public sealed class SimulatedBench : ISimulatedQuantity
{
    private const double WaveformSeconds = 3;
    private const double CalmStepSeconds = 0.02;
    private const double LongestWindowSeconds = 10;
    private const double MainsNoiseShare = 0.0005;

    private readonly Lock _gate = new();
    private readonly Scenario _scenario;
    private readonly CircuitSimulation _circuit;
    private readonly Unit _unit;
    private readonly WanderingMains _mains;
    private readonly Random _meterNoise;
    private readonly MeanSquares _squares = new(LongestWindowSeconds);
    private readonly Queue<ScenarioFault> _coming;
    private readonly double _warmUpOhms;
    private double _seconds;
    private double _waveformUntil;
    private double _shortingSince = double.NaN;
    private double _shortingMinutes;
    private double _mainsFactor = 1;
    private bool _isOpen;
    private FailingContact? _contact;

    /// <summary>Builds the bench of a scenario, with what the scenario hides drawn from its seed.</summary>
    /// <exception cref="FormatException">A text of the scenario cannot be read.</exception>
    public SimulatedBench(Scenario scenario)
    {
        _scenario = scenario;
        var random = new Random(scenario.Seed);
        var mains = Mains.Parse(scenario.Mains);
        var nameplates = Bank.Parse(scenario.Bank, mains);
        var bank = nameplates.With([.. nameplates.Lamps.Select(lamp => Spread(lamp, random, scenario.Truth.LampSpreadPercent / 100))]);
        _unit = Unit.Parse(scenario.Unit, mains);
        _mains = new WanderingMains(mains.Volts, scenario.Truth.MainsWanderPercent / 100, random);
        _meterNoise = new Random(random.Next());
        _circuit = new CircuitSimulation(mains, bank, _unit, phaseDegrees: random.NextDouble() * 360);
        _warmUpOhms = NominalOhms(mains, _unit);
        _coming = new Queue<ScenarioFault>(scenario.Faults.Where(fault => fault.Kind != "meter-unplugged").OrderBy(fault => fault.AtSeconds));
    }

    /// <summary>True RMS over the window, with the scenario's proportional noise; gain error, counts and range are the instrument's.</summary>
    public double Rms(MeasuredQuantity quantity, double simulatedSeconds, double windowSeconds)
    {
        lock (_gate)
        {
            AdvanceTo(simulatedSeconds);
            var (amps, volts) = _squares.RmsOver(windowSeconds);
            return quantity == MeasuredQuantity.MainsVoltage
                ? volts * (1 + Normal(_meterNoise) * MainsNoiseShare)
                : amps * (1 + Normal(_meterNoise) * _scenario.Meter.NoisePercent / 100);
        }
    }

    private void AdvanceTo(double seconds)
    {
        while (_seconds < seconds - 1e-9)
        {
            var volts = _mains.At(_seconds) * _mainsFactor;
            if (_seconds < _scenario.SwitchOnSeconds)
            {
                // The switch is open: nothing flows and every filament stays cold.
                var wait = Math.Min(Math.Min(seconds, _scenario.SwitchOnSeconds) - _seconds, CalmStepSeconds);
                _seconds += wait;
                _squares.Add(_seconds, 0, volts, wait);
                _waveformUntil = _scenario.SwitchOnSeconds + WaveformSeconds;
                continue;
            }

            while (_coming.TryPeek(out var fault) && fault.AtSeconds <= _seconds)
            {
                Strike(_coming.Dequeue());
            }

            if (_contact is { } contact && contact.IsOutAt(_seconds) != _isOpen)
            {
                _waveformUntil = _seconds + WaveformSeconds;
                Connect(_isOpen);
            }

            _circuit.MainsVolts = volts;
            if (!_isOpen)
            {
                _circuit.FaultOhms = ParallelOhms();
            }

            var step = Math.Min(CalmStepSeconds, seconds - _seconds);
            var amps = _seconds < _waveformUntil ? _circuit.Run(step = Math.Max(_circuit.StepSeconds, step)) : _circuit.Coast(step);
            _seconds += step;
            _squares.Add(_seconds, amps, volts, step);
        }
    }

    private void Strike(ScenarioFault fault)
    {
        _waveformUntil = _seconds + WaveformSeconds;
        switch (fault.Kind)
        {
            case "hard-short":
                _contact = null;
                _circuit.ReplaceUnit(ResistorUnit.Short);
                break;
            case "open":
                _contact = null;
                Connect(false);
                break;
            case "intermittent" or "cycling":
                _contact = new FailingContact(fault, new Random(_scenario.Seed));
                break;
            case "developing-short":
                (_shortingSince, _shortingMinutes) = (_seconds, fault.Minutes);
                break;
            case "lamp-out":
                _circuit.SetLampOut(fault.Lamp - 1, isOut: true);
                break;
            case "mains-step":
                _mainsFactor *= 1 + fault.Percent / 100;
                break;
        }
    }

    private void Connect(bool isConnected)
    {
        _circuit.ReplaceUnit(isConnected ? _unit : ResistorUnit.Open);
        _circuit.FaultOhms = double.PositiveInfinity;
        _isOpen = !isConnected;
    }

    /// <summary>What lies in parallel with the nominal unit: its warm-up, and a fault that grows.</summary>
    private double ParallelOhms()
    {
        var minutes = (_seconds - _scenario.SwitchOnSeconds) / 60;
        var siemens = _scenario.Truth.WarmUpPercent / 100 * Math.Exp(-minutes / _scenario.Truth.WarmUpMinutes) / _warmUpOhms;
        if (!double.IsNaN(_shortingSince))
        {
            // The unit's whole conductance grows by e in each time constant; the surplus is the fault's.
            siemens += (Math.Exp(Math.Min(20, (_seconds - _shortingSince) / (60 * _shortingMinutes))) - 1) / _warmUpOhms;
        }

        return siemens == 0 ? double.PositiveInfinity : 1 / siemens;
    }

    private static double NominalOhms(Mains mains, Unit unit)
    {
        var direct = Bank.Parse("0.01 ohm", mains);
        var amps = new CircuitSimulation(mains, direct, unit).Coast(60);
        return amps > 0 ? mains.Volts / amps : 1e6;
    }

    private static Lamp Spread(Lamp lamp, Random random, double share) => lamp.Filament is null
        ? lamp
        : Lamp.FromNameplate(lamp.Name, lamp.RatedWatts * (1 + share * Normal(random)), lamp.RatedVolts, lamp.Fill);

    /// <summary>A standard normal number by the polar method of Marsaglia.</summary>
    internal static double Normal(Random random)
    {
        while (true)
        {
            var (x, y) = (2 * random.NextDouble() - 1, 2 * random.NextDouble() - 1);
            var square = x * x + y * y;
            if (square is > 0 and < 1)
            {
                return x * Math.Sqrt(-2 * Math.Log(square) / square);
            }
        }
    }
}
