using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Tungsten;

namespace Lampwarden.Analysis.Units;

/// <summary>A lamp as the unit: the classic first trial of a limiter.</summary>
public sealed class LampUnit : Unit
{
    /// <param name="text">As written.</param>
    /// <param name="lamp">A lamp with a filament.</param>
    public LampUnit(string text, Lamp lamp)
        : base(text)
    {
        ArgumentNullException.ThrowIfNull(lamp.Filament, nameof(lamp));
        Lamp = lamp;
    }

    /// <summary>The lamp.</summary>
    public Lamp Lamp { get; }

    internal override Unit Scaled(double factor) => new LampUnit(Text, Lamp.With(Lamp.Filament! with { Watts = Lamp.Filament.Watts * factor }));

    internal override double DefaultUncertainty => Lamp.Tolerance.WattsShare;

    internal override UnitDynamics NewDynamics(Mains mains) => new Dynamics(Lamp.Filament!);

    internal override UnitResponse NewResponse(Mains mains) => new Response(Lamp);

    private sealed class Dynamics(Filament filament) : UnitDynamics
    {
        private readonly FilamentGrid grid = FilamentGrid.At(filament.AmbientKelvin);
        private readonly FilamentCoefficients coefficients = new(filament, FilamentGrid.At(filament.AmbientKelvin));

        public override int StateCount => 1;

        public override void Rest(Span<double> state) => state[0] = filament.AmbientKelvin;

        public override double Current(double volts, double seriesOhms, ReadOnlySpan<double> state, Span<double> rates)
        {
            var ohms = coefficients.Ohms(grid, state[0]);
            var amps = volts / (seriesOhms + ohms);
            rates[0] = coefficients.KelvinPerSecond(grid, state[0], amps * amps * ohms);
            return amps;
        }
    }

    private sealed class Response(Lamp lamp) : UnitResponse
    {
        private readonly BankSolver solver = new(new Bank(lamp.Name, new LampPart(lamp)));

        public override UnitPoint At(double volts, double seriesOhms)
        {
            var amps = solver.Feed(volts, seriesOhms);
            return UnitPoint.Sinusoid(amps, solver.BankVolts, amps * solver.BankVolts);
        }
    }
}
