using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Units;

/// <summary>
/// A heating element whose resistance rises from cold to hot: warmth follows the power with one time constant, resistance follows the warmth.
/// </summary>
public sealed class HeaterUnit : Unit
{
    /// <summary>Cold over hot resistance of nickel-chromium wire; recalled from memory.</summary>
    public const double DefaultColdShare = 0.95;

    // A sheathed element; common practice, no published source.
    private const double WarmSeconds = 20;

    /// <param name="text">As written.</param>
    /// <param name="watts">At nominal mains, hot; 1 to 20 000 W.</param>
    /// <param name="volts">Nominal mains.</param>
    /// <param name="coldOhms">Cold resistance; NaN takes <see cref="DefaultColdShare"/> of the hot one.</param>
    public HeaterUnit(string text, double watts, double volts, double coldOhms = double.NaN)
        : base(text)
    {
        (Watts, HotOhms) = (watts, volts * volts / watts);
        ColdOhms = double.IsNaN(coldOhms) ? DefaultColdShare * HotOhms : coldOhms;
    }

    /// <summary>Power at nominal mains, hot.</summary>
    public double Watts { get; }

    /// <summary>Resistance at that power.</summary>
    public double HotOhms { get; }

    /// <summary>Resistance at room temperature.</summary>
    public double ColdOhms { get; }

    internal override Unit Scaled(double factor) => new HeaterUnit(Text, Watts * factor, Math.Sqrt(Watts * HotOhms), ColdOhms / factor);

    internal override UnitDynamics NewDynamics(Mains mains) => new Dynamics(this);

    internal override UnitResponse NewResponse(Mains mains) => new Response(this);

    // Warmth is 0 cold and 1 at nominal mains.
    private double Ohms(double warmth) => ColdOhms + (HotOhms - ColdOhms) * warmth;

    private sealed class Dynamics(HeaterUnit unit) : UnitDynamics
    {
        public override int StateCount => 1;

        public override void Rest(Span<double> state) => state[0] = 0;

        public override double Current(double volts, double seriesOhms, ReadOnlySpan<double> state, Span<double> rates)
        {
            var ohms = unit.Ohms(state[0]);
            var amps = volts / (seriesOhms + ohms);
            rates[0] = (amps * amps * ohms / unit.Watts - state[0]) / WarmSeconds;
            return amps;
        }
    }

    private sealed class Response(HeaterUnit unit) : UnitResponse
    {
        public override UnitPoint At(double volts, double seriesOhms)
        {
            // The warmth must be the one that its own power gives.
            double low = 0, high = 4;
            for (var halving = 0; halving < 60; halving++)
            {
                var middle = 0.5 * (low + high);
                (low, high) = Power(middle) / unit.Watts > middle ? (middle, high) : (low, middle);
            }

            var ohms = unit.Ohms(low);
            var amps = volts / (seriesOhms + ohms);
            return UnitPoint.Sinusoid(amps, amps * ohms, amps * amps * ohms);

            double Power(double warmth)
            {
                var resistance = unit.Ohms(warmth);
                var current = volts / (seriesOhms + resistance);
                return current * current * resistance;
            }
        }
    }
}
