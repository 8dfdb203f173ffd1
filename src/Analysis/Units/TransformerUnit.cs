using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Units;

/// <summary>
/// A mains transformer, idle or loaded: winding resistance in series, then core loss, load and a saturating magnetising branch side by
/// side. The core is i = a (x + b x^9) with x the flux over its nominal peak: nearly straight to there, steep beyond.
/// </summary>
public sealed class TransformerUnit : Unit
{
    // Small mains transformers of 20 to 200 VA, relative to their rating; common practice, no published source.
    private const double MagnetisingShare = 0.12;
    private const double CoreLossShare = 0.05;
    private const double WindingShare = 0.06;
    private const double Knee = 0.35;

    // Flux left in the core at the worst moment of switching off, as a share of its nominal peak; common practice.
    private const double RemanentShare = 0.7;

    // RMS of x + b x^9 over a sinusoid: mean squares 1/2, 63/256 and 48620/262144 of the powers 2, 10 and 18.
    private static readonly double WaveRms = Math.Sqrt(0.5 + 2 * Knee * 63 / 256 + Knee * Knee * 48620 / 262144);

    private readonly double peakFlux;
    private readonly double magnetisingAmps;
    private readonly double shuntOhms;
    private readonly double windingOhms;

    /// <param name="text">As written.</param>
    /// <param name="voltAmperes">Rating, 1 to 10 000 VA.</param>
    /// <param name="loadWatts">What it passes on, 0 (idle) to its rating.</param>
    /// <param name="mains">The mains it is made for.</param>
    public TransformerUnit(string text, double voltAmperes, double loadWatts, Mains mains)
        : base(text)
    {
        (VoltAmperes, LoadWatts, Nominal) = (voltAmperes, loadWatts, mains);
        var ratedAmps = voltAmperes / mains.Volts;
        peakFlux = Math.Sqrt(2) * mains.Volts / (2 * Math.PI * mains.Hertz);
        magnetisingAmps = MagnetisingShare * ratedAmps / WaveRms;
        shuntOhms = mains.Volts * mains.Volts / (CoreLossShare * voltAmperes + loadWatts);
        windingOhms = WindingShare * mains.Volts / ratedAmps;
    }

    /// <summary>Rating.</summary>
    public double VoltAmperes { get; }

    /// <summary>What it passes on.</summary>
    public double LoadWatts { get; }

    internal Mains Nominal { get; }

    internal override Unit Scaled(double factor) => new TransformerUnit(Text, VoltAmperes * factor, LoadWatts * factor, Nominal);

    internal override UnitDynamics NewDynamics(Mains mains) => new Dynamics(this);

    internal override UnitResponse NewResponse(Mains mains) => new Response(this, mains);

    // Line current at a flux, and the voltage that changes the flux.
    private double Amps(double volts, double seriesOhms, double flux, out double fluxVolts)
    {
        var x = flux / peakFlux;
        var square = x * x;
        var magnetising = magnetisingAmps * x * (1 + Knee * square * square * square * square);
        var ohms = seriesOhms + windingOhms;
        fluxVolts = (volts - ohms * magnetising) / (1 + ohms / shuntOhms);
        return magnetising + fluxVolts / shuntOhms;
    }

    private sealed class Dynamics(TransformerUnit unit) : UnitDynamics
    {
        public override int StateCount => 1;

        public override void Rest(Span<double> state) => state[0] = RemanentShare * unit.peakFlux;

        public override double Current(double volts, double seriesOhms, ReadOnlySpan<double> state, Span<double> rates) =>
            unit.Amps(volts, seriesOhms, state[0], out rates[0]);
    }

    // Half a cycle later the flux must be its own mirror image: one unknown.
    private sealed class Response(TransformerUnit unit, Mains mains) : UnitResponse
    {
        private const int Steps = 60;
        private readonly double[] sine = [.. Enumerable.Range(0, 2 * Steps + 1).Select(half => Math.Sin(Math.PI * half / (2 * Steps)))];

        public override UnitPoint At(double volts, double seriesOhms)
        {
            var most = 3 * unit.peakFlux;
            var sums = new WaveSums();
            var bracket = new Bracket(-most, most - HalfCycle(volts, seriesOhms, -most, ref sums), most, -most - HalfCycle(volts, seriesOhms, most, ref sums));
            var flux = 0.0;
            for (var iteration = 0; iteration < 60 && bracket.Width > 1e-10 * unit.peakFlux; iteration++)
            {
                flux = bracket.Next;
                var excess = -(flux + HalfCycle(volts, seriesOhms, flux, ref sums));
                if (Math.Abs(excess) < 1e-9 * unit.peakFlux)
                {
                    break;
                }

                bracket.Take(flux, excess);
            }

            sums = new WaveSums();
            HalfCycle(volts, seriesOhms, flux, ref sums);
            return sums.Point(mirrored: true);
        }

        private double HalfCycle(double volts, double seriesOhms, double flux, ref WaveSums sums)
        {
            var peak = Math.Sqrt(2) * volts;
            var step = 1 / (2 * mains.Hertz * Steps);
            for (var index = 0; index < Steps; index++)
            {
                var source = peak * sine[2 * index];
                var amps = unit.Amps(source, seriesOhms, flux, out var rate0);
                sums.Add(amps, source - seriesOhms * amps);
                unit.Amps(peak * sine[2 * index + 1], seriesOhms, flux + 0.5 * step * rate0, out var rate1);
                unit.Amps(peak * sine[2 * index + 1], seriesOhms, flux + 0.5 * step * rate1, out var rate2);
                unit.Amps(peak * sine[2 * index + 2], seriesOhms, flux + step * rate2, out var rate3);
                flux += step / 6 * (rate0 + 2 * (rate1 + rate2) + rate3);
            }

            return flux;
        }
    }
}
