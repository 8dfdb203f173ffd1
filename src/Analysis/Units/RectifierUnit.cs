using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Units;

/// <summary>
/// A rectifier with a reservoir capacitor and a resistive load behind it, as in a linear supply or a valve set: a bridge, or one diode.
/// The load is the one that takes the plate's watts at nominal mains.
/// </summary>
public sealed class RectifierUnit : Unit
{
    /// <summary>Drop of one silicon diode; common practice.</summary>
    public const double DiodeVolts = 0.8;

    /// <summary>Wiring, protection and capacitor of a small supply; common practice, no published source.</summary>
    public const double DefaultInnerOhms = 0.5;

    private readonly double siemens;

    /// <param name="text">As written.</param>
    /// <param name="watts">At nominal mains, 0.1 to 5000 W.</param>
    /// <param name="farads">Reservoir, 1e-7 to 0.1 F.</param>
    /// <param name="innerOhms">Between the line and the capacitor, 0.01 to 1000 ohm.</param>
    /// <param name="fullWave">A bridge; false is one diode.</param>
    /// <param name="mains">Nominal mains.</param>
    public RectifierUnit(string text, double watts, double farads, double innerOhms, bool fullWave, Mains mains)
        : base(text)
    {
        (Watts, Nominal) = (watts, mains);
        Reservoir = new Reservoir(fullWave ? 2 * DiodeVolts : DiodeVolts, innerOhms, farads, fullWave);
        siemens = LoadSiemens();
    }

    /// <summary>Power at nominal mains.</summary>
    public double Watts { get; }

    /// <summary>Resistance of the load behind the capacitor.</summary>
    public double LoadOhms => 1 / siemens;

    internal Reservoir Reservoir { get; }

    internal Mains Nominal { get; }

    internal override Unit Scaled(double factor) =>
        new RectifierUnit(Text, Watts * factor, Reservoir.Farads, Reservoir.InnerOhms, Reservoir.FullWave, Nominal);

    /// <summary>The same load behind a capacitor that is larger by a factor.</summary>
    internal RectifierUnit WithCapacitance(double factor) =>
        new(Text, Watts, Reservoir.Farads * factor, Reservoir.InnerOhms, Reservoir.FullWave, Nominal);

    internal override UnitDynamics NewDynamics(Mains mains) => new Dynamics(Reservoir, siemens);

    internal override UnitResponse NewResponse(Mains mains) => new Response(Reservoir, siemens, mains.Hertz);

    private double LoadSiemens()
    {
        // Power grows with the load; bracketed between a hundredth and a hundredfold of the first guess.
        var guess = Math.Log(Watts / (2 * Nominal.Volts * Nominal.Volts));
        double low = guess - 4.6, high = guess + 4.6;
        var bracket = new Bracket(low, Excess(low), high, Excess(high));
        var place = guess;
        for (var iteration = 0; iteration < 60 && bracket.Width > 1e-9; iteration++)
        {
            place = bracket.Next;
            var excess = Excess(place);
            if (Math.Abs(excess) < 1e-9)
            {
                break;
            }

            bracket.Take(place, excess);
        }

        return Math.Exp(place);

        double Excess(double log) => 1 - Reservoir.Settle(Nominal.Volts, Nominal.Hertz, 1e-3, Math.Exp(log)).Watts / Watts;
    }

    private sealed class Dynamics(Reservoir reservoir, double siemens) : UnitDynamics
    {
        public override int StateCount => 1;

        public override double LongestStepSeconds(double leastOhms, double mostOhms) => reservoir.LongestStepSeconds(leastOhms);

        public override void Rest(Span<double> state) => state[0] = 0;

        public override double Current(double volts, double seriesOhms, ReadOnlySpan<double> state, Span<double> rates)
        {
            rates[0] = reservoir.RateOf(volts, seriesOhms, state[0], siemens, 0);
            return reservoir.LineAmps(volts, seriesOhms, state[0]);
        }
    }

    private sealed class Response(Reservoir reservoir, double siemens, double hertz) : UnitResponse
    {
        public override UnitPoint At(double volts, double seriesOhms) => reservoir.Settle(volts, hertz, seriesOhms, siemens);
    }
}
