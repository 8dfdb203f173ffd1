using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Units;

/// <summary>
/// A small induction motor by its equivalent circuit (stator, magnetising branch, rotor with resistance over slip) and its inertia: locked
/// rotor at first, running later, or humming for ever behind a bank too small for it.
/// </summary>
public sealed class MotorUnit : Unit
{
    // Relative to volts squared over watts; a small single-phase motor with a capacitor or shaded poles comes near. Common practice,
    // no published source: locked rotor takes five to six times the running current.
    private const double StatorOhmsShare = 0.055;
    private const double StatorReactanceShare = 0.055;
    private const double MagnetisingShare = 0.85;
    private const double RotorOhmsShare = 0.05;
    private const double RotorReactanceShare = 0.055;

    // Kinetic energy at full speed over rated watts, in seconds; and the load, a fan with some friction.
    private const double InertiaSeconds = 0.4;
    private const double FrictionShare = 0.15;

    // Full speed is never reached; below this slip the rotor's resistance would grow without bound.
    private const double LeastSlip = 0.02;

    private readonly double ratedTorqueWatts;

    /// <param name="text">As written.</param>
    /// <param name="watts">Taken at nominal mains, running; 5 to 5000 W.</param>
    /// <param name="mains">Nominal mains.</param>
    public MotorUnit(string text, double watts, Mains mains)
        : base(text)
    {
        (Watts, Nominal) = (watts, mains);
        BaseOhms = mains.Volts * mains.Volts / watts;

        // The slip at which the motor takes its plate's watts at nominal mains; its torque there is the load's.
        double low = LeastSlip, high = 0.3;
        for (var halving = 0; halving < 60; halving++)
        {
            var slip = 0.5 * (low + high);
            (low, high) = Solve(mains.Volts, 1e-6, slip, out _).Watts < watts ? (slip, high) : (low, slip);
        }

        RatedSlip = low;
        Solve(mains.Volts, 1e-6, low, out ratedTorqueWatts);
    }

    /// <summary>Power at nominal mains.</summary>
    public double Watts { get; }

    /// <summary>Slip at nominal mains.</summary>
    public double RatedSlip { get; }

    internal Mains Nominal { get; }

    private double BaseOhms { get; }

    private double StatorOhms => StatorOhmsShare * BaseOhms;

    private double RotorOhms => RotorOhmsShare * BaseOhms;

    internal override Unit Scaled(double factor) => new MotorUnit(Text, Watts * factor, Nominal);

    internal override UnitDynamics NewDynamics(Mains mains) => new Dynamics(this);

    internal override UnitResponse NewResponse(Mains mains) => new MotorResponse(this);

    /// <summary>Torque of the load, as air-gap watts, at a speed of 0 to 1.</summary>
    internal double LoadTorque(double speed) => ratedTorqueWatts * (FrictionShare + (1 - FrictionShare) * Math.Pow(speed / (1 - RatedSlip), 2));

    /// <summary>The sinusoidal steady state at a slip, and the torque as air-gap watts.</summary>
    internal UnitPoint Solve(double volts, double seriesOhms, double slip, out double torqueWatts)
    {
        var magnetising = new System.Numerics.Complex(0, MagnetisingShare * BaseOhms);
        var rotor = new System.Numerics.Complex(RotorOhms / Math.Max(slip, LeastSlip), RotorReactanceShare * BaseOhms);
        var motor = new System.Numerics.Complex(StatorOhms, StatorReactanceShare * BaseOhms) + magnetising * rotor / (magnetising + rotor);
        var amps = volts / (seriesOhms + motor).Magnitude;
        var rotorAmps = amps * (magnetising / (magnetising + rotor)).Magnitude;
        torqueWatts = rotorAmps * rotorAmps * rotor.Real;
        return UnitPoint.Sinusoid(amps, amps * motor.Magnitude, amps * amps * motor.Real);
    }

    private sealed class Dynamics(MotorUnit unit) : UnitDynamics
    {
        private readonly double radians = 2 * Math.PI * unit.Nominal.Hertz;

        private double StatorHenries => StatorReactanceShare * unit.BaseOhms / radians;

        private double RotorHenries => RotorReactanceShare * unit.BaseOhms / radians;

        private double MutualHenries => MagnetisingShare * unit.BaseOhms / radians;

        // Stator current, rotor current, speed from 0 to 1.
        public override int StateCount => 3;

        public override double LongestStepSeconds(double leastOhms, double mostOhms) =>
            0.7 * Math.Min(StatorHenries / (mostOhms + unit.StatorOhms), RotorHenries * LeastSlip / unit.RotorOhms);

        public override void Rest(Span<double> state) => state.Clear();

        public override double Current(double volts, double seriesOhms, ReadOnlySpan<double> state, Span<double> rates)
        {
            var (stator, rotor, speed) = (state[0], state[1], state[2]);
            var rotorOhms = unit.RotorOhms / Math.Max(1 - speed, LeastSlip);
            rates[2] = (rotor * rotor * rotorOhms - unit.LoadTorque(Math.Max(0, speed))) / (2 * InertiaSeconds * unit.Watts);
            rates[2] = speed <= 0 ? Math.Max(0, rates[2]) : rates[2];

            // An opened circuit: the stator's current is gone within the millisecond.
            if (seriesOhms > 1e5)
            {
                (rates[0], rates[1]) = (-stator * 1e3, -rotor * 1e3);
                return stator;
            }

            var (l1, l2, mutual) = (StatorHenries, RotorHenries, MutualHenries);
            var overStator = volts - (seriesOhms + unit.StatorOhms) * stator;
            var airGap = (mutual / l1 * overStator + mutual / l2 * rotorOhms * rotor) / (1 + mutual / l1 + mutual / l2);
            rates[0] = (overStator - airGap) / l1;
            rates[1] = (airGap - rotorOhms * rotor) / l2;
            return stator;
        }
    }
}
