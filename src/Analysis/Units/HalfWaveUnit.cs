using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Units;

/// <summary>One diode and a resistance, without a capacitor: a half-power setting, or a bridge with one diode shorted. Draws direct current.</summary>
public sealed class HalfWaveUnit : Unit
{
    private const int StepsPerHalf = 200;

    /// <param name="text">As written.</param>
    /// <param name="ohms">Behind the diode, 0 (the diode alone) and up.</param>
    public HalfWaveUnit(string text, double ohms)
        : base(text) => Ohms = ohms;

    /// <summary>Resistance behind the diode.</summary>
    public double Ohms { get; }

    /// <summary>The unit that takes these watts at nominal mains.</summary>
    public static HalfWaveUnit FromWatts(string text, double watts, Mains mains) => new(text, mains.Volts * mains.Volts / (2 * watts));

    internal override Unit Scaled(double factor) => new HalfWaveUnit(Text, Ohms / factor);

    internal override double DefaultUncertainty => Ohms == 0 ? 0 : 0.10;

    internal override UnitDynamics NewDynamics(Mains mains) => new Dynamics(Ohms);

    internal override UnitResponse NewResponse(Mains mains) => new Response(Ohms);

    private static double Amps(double volts, double ohms) => volts > RectifierUnit.DiodeVolts ? (volts - RectifierUnit.DiodeVolts) / ohms : 0;

    private sealed class Dynamics(double ohms) : UnitDynamics
    {
        public override double Current(double volts, double seriesOhms, ReadOnlySpan<double> state, Span<double> rates) =>
            Amps(volts, seriesOhms + ohms);
    }

    private sealed class Response(double ohms) : UnitResponse
    {
        private readonly double[] sine = [.. Enumerable.Range(0, 2 * StepsPerHalf).Select(index => Math.Sin(Math.PI * index / StepsPerHalf))];

        public override UnitPoint At(double volts, double seriesOhms)
        {
            var first = Sum(volts, seriesOhms, new WaveSums());
            return Sum(volts, seriesOhms, new WaveSums(first.DirectAmps));
        }

        private UnitPoint Sum(double volts, double seriesOhms, WaveSums sums)
        {
            foreach (var share in sine)
            {
                var source = Math.Sqrt(2) * volts * share;
                var amps = Amps(source, seriesOhms + ohms);
                sums.Add(amps, source - seriesOhms * amps);
            }

            return sums.Point(mirrored: false);
        }
    }
}
