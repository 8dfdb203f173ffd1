using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Units;

/// <summary>
/// A switch-mode supply: bridge, bulk capacitor and a converter that takes constant power. It starts when the capacitor has reached the
/// start voltage and stops below the stop voltage, so that behind a bank too small for it, it starts and stops for ever: it hiccups.
/// </summary>
public sealed class SwitchModeUnit : Unit
{
    /// <summary>Starts at this mains voltage, or rather at its peak on the capacitor; universal-input supplies, common practice.</summary>
    public const double DefaultStartVolts = 85;

    /// <summary>Stops when the capacitor has fallen to the peak of this mains voltage; common practice.</summary>
    public const double DefaultStopVolts = 60;

    // Bulk capacitance per watt: 1 uF/W for 230 V, 2 uF/W below; common practice, no published source.
    private const double MicroFaradsPerWatt = 1;
    private const double MicroFaradsPerWattLowMains = 2;
    private const double LeastMicroFarads = 10;

    /// <param name="text">As written.</param>
    /// <param name="watts">At nominal mains, 0.5 to 5000 W.</param>
    /// <param name="farads">Bulk capacitor; NaN takes a usual one.</param>
    /// <param name="startVolts">Mains at which it starts.</param>
    /// <param name="stopVolts">Mains at which it stops.</param>
    /// <param name="mains">Nominal mains.</param>
    public SwitchModeUnit(string text, double watts, double farads, double startVolts, double stopVolts, Mains mains)
        : base(text)
    {
        (Watts, Nominal, StartVolts, StopVolts) = (watts, mains, startVolts, stopVolts);
        var usual = 1e-6 * Math.Max(LeastMicroFarads, watts * (mains.Volts < 160 ? MicroFaradsPerWattLowMains : MicroFaradsPerWatt));
        Reservoir = new Reservoir(2 * RectifierUnit.DiodeVolts, RectifierUnit.DefaultInnerOhms, double.IsNaN(farads) ? usual : farads, true);
    }

    /// <summary>Power at nominal mains.</summary>
    public double Watts { get; }

    /// <summary>Mains at which it starts.</summary>
    public double StartVolts { get; }

    /// <summary>Mains at which it stops.</summary>
    public double StopVolts { get; }

    /// <summary>What the converter takes from the capacitor: the plate's watts less the bridge's loss at a usual peaky current.</summary>
    public double ConverterWatts => Watts * (1 - Reservoir.Drop / (1.3 * Nominal.Volts));

    internal Reservoir Reservoir { get; }

    internal Mains Nominal { get; }

    internal override Unit Scaled(double factor) => new SwitchModeUnit(Text, Watts * factor, Reservoir.Farads, StartVolts, StopVolts, Nominal);

    /// <summary>The same supply with a bulk capacitor that is larger by a factor.</summary>
    internal SwitchModeUnit WithCapacitance(double factor) => new(Text, Watts, Reservoir.Farads * factor, StartVolts, StopVolts, Nominal);

    internal override UnitDynamics NewDynamics(Mains mains) => new Dynamics(this);

    internal override UnitResponse NewResponse(Mains mains) => new SwitchModeResponse(this, mains.Hertz);

    private sealed class Dynamics(SwitchModeUnit unit) : UnitDynamics
    {
        private readonly double startPeak = Math.Sqrt(2) * unit.StartVolts;
        private readonly double stopPeak = Math.Sqrt(2) * unit.StopVolts;

        // The capacitor's volts, and 1 while the converter runs.
        public override int StateCount => 2;

        public override double LongestStepSeconds(double leastOhms, double mostOhms) => unit.Reservoir.LongestStepSeconds(leastOhms);

        public override void Rest(Span<double> state) => state.Clear();

        public override double Current(double volts, double seriesOhms, ReadOnlySpan<double> state, Span<double> rates)
        {
            rates[0] = unit.Reservoir.RateOf(volts, seriesOhms, state[0], 0, state[1] * unit.ConverterWatts);
            rates[1] = 0;
            return unit.Reservoir.LineAmps(volts, seriesOhms, state[0]);
        }

        public override void EndStep(Span<double> state)
        {
            state[0] = Math.Max(0, state[0]);
            state[1] = state[0] >= startPeak ? 1 : state[0] <= stopPeak ? 0 : state[1];
        }
    }
}
