using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Units;

/// <summary>A constant resistance; a dead short and an open circuit are its ends.</summary>
public sealed class ResistorUnit : Unit
{
    /// <summary>What stands for no connection, in ohms.</summary>
    public const double OpenOhms = 1e9;

    /// <param name="text">As written.</param>
    /// <param name="ohms">0 (a short) to <see cref="OpenOhms"/>.</param>
    public ResistorUnit(string text, double ohms)
        : base(text) => Ohms = ohms;

    /// <summary>A dead short.</summary>
    public static ResistorUnit Short { get; } = new("short", 0);

    /// <summary>Nothing connected.</summary>
    public static ResistorUnit Open { get; } = new("open", OpenOhms);

    /// <summary>Resistance in ohms.</summary>
    public double Ohms { get; }

    internal override Unit Scaled(double factor) => Ohms is 0 or OpenOhms ? this : new ResistorUnit(Text, Ohms / factor);

    internal override double DefaultUncertainty => Ohms is 0 or OpenOhms ? 0 : 0.01;

    internal override UnitDynamics NewDynamics(Mains mains) => new Dynamics(Ohms);

    internal override UnitResponse NewResponse(Mains mains) => new Response(Ohms);

    private sealed class Dynamics(double ohms) : UnitDynamics
    {
        public override double Current(double volts, double seriesOhms, ReadOnlySpan<double> state, Span<double> rates) => volts / (seriesOhms + ohms);
    }

    private sealed class Response(double ohms) : UnitResponse
    {
        public override double PlainOhms => ohms;

        public override UnitPoint At(double volts, double seriesOhms)
        {
            var amps = volts / (seriesOhms + ohms);
            return UnitPoint.Sinusoid(amps, amps * ohms, amps * amps * ohms);
        }
    }
}
