using System.Globalization;

namespace Lampwarden.Analysis.Lamps;

/// <summary>A lamp of a bank, or a plain resistor in a lamp's place. Immutable and thread-safe.</summary>
public sealed partial class Lamp
{
    /// <summary>Room temperature taken where none is given, in kelvin.</summary>
    public const double RoomKelvin = 293.15;

    /// <summary>Exponent of the gas loss: thermal conductivity of argon rises as about T^0.7 (recalled from memory).</summary>
    public const double GasExponent = 1.7;

    // Defaults of the small losses: what two measured curves ask for, see docs/model.md, "Measured lamps".
    internal const double DefaultGasShare = 0.09;
    internal const double DefaultGasLeadShare = 0.01;
    internal const double DefaultVacuumLeadShare = 0.002;
    internal const double DefaultCoilFactor = 0.65;

    private readonly Lazy<FilamentCurve>? curve;

    private Lamp(
        string name,
        double ratedWatts,
        double ratedVolts,
        LampFill fill,
        double resistorOhms,
        Filament? filament,
        LampTolerance tolerance,
        Lazy<FilamentCurve>? curve = null)
    {
        Tolerance = tolerance;
        (Name, RatedWatts, RatedVolts, Fill, ResistorOhms, Filament) = (name, ratedWatts, ratedVolts, fill, resistorOhms, filament);
        this.curve = filament is null ? null : curve ?? new Lazy<FilamentCurve>(() => new FilamentCurve(filament));
    }

    /// <summary>Inventory name, or the text it was written with.</summary>
    public string Name { get; }

    /// <summary>Nameplate watts; NaN for a plain resistor.</summary>
    public double RatedWatts { get; }

    /// <summary>Nameplate volts; NaN for a plain resistor.</summary>
    public double RatedVolts { get; }

    /// <summary>Gas filled, vacuum, or no lamp at all.</summary>
    public LampFill Fill { get; }

    /// <summary>The filament; null for a plain resistor.</summary>
    public Filament? Filament { get; }

    /// <summary>How well all this is known.</summary>
    public LampTolerance Tolerance { get; }

    /// <summary>Resistance at room temperature, in ohms.</summary>
    public double ColdOhms => Filament?.ColdOhms ?? ResistorOhms;

    internal double ResistorOhms { get; }

    internal FilamentCurve Curve => curve!.Value;

    /// <summary>A lamp known only by its nameplate.</summary>
    /// <param name="name">Any text.</param>
    /// <param name="ratedWatts">1 to 2000 W; the model was checked from 7 to 300 W.</param>
    /// <param name="ratedVolts">2 to 480 V; the model was checked from 100 to 250 V.</param>
    /// <param name="fill">Null takes vacuum up to 25 W and gas above, as most makers do.</param>
    /// <param name="roomKelvin">Temperature of the cold filament, 270 to 330 K.</param>
    /// <exception cref="ArgumentOutOfRangeException">A value lies outside its range.</exception>
    public static Lamp FromNameplate(string name, double ratedWatts, double ratedVolts, LampFill? fill = null, double roomKelvin = RoomKelvin)
    {
        Check(ratedWatts is >= 1 and <= 2000, nameof(ratedWatts), ratedWatts, "A lamp has 1 to 2000 W.");
        Check(ratedVolts is >= 2 and <= 480, nameof(ratedVolts), ratedVolts, "A lamp is rated for 2 to 480 V.");
        Check(roomKelvin is >= 270 and <= 330, nameof(roomKelvin), roomKelvin, "A room has 270 to 330 K.");
        Check(fill != LampFill.Resistor, nameof(fill), fill, "Use Lamp.PlainResistor for a resistor.");
        var filled = fill ?? (ratedWatts <= 25 ? LampFill.Vacuum : LampFill.Gas);
        var gas = filled == LampFill.Gas;
        var filament = new Filament(
            ratedWatts,
            ratedVolts,
            AssumedHotKelvin(ratedWatts, ratedVolts, filled),
            gas ? DefaultGasShare : 0,
            gas ? DefaultGasLeadShare : DefaultVacuumLeadShare,
            DefaultCoilFactor,
            roomKelvin);
        return new Lamp(
            name, ratedWatts, ratedVolts, filled, double.NaN, filament, gas ? LampTolerance.GasNameplate : LampTolerance.VacuumNameplate);
    }

    /// <summary>A plain resistor in a lamp's place, for comparison.</summary>
    /// <param name="name">Any text.</param>
    /// <param name="ohms">0.001 to 1e7 ohm.</param>
    /// <exception cref="ArgumentOutOfRangeException">The resistance lies outside its range.</exception>
    public static Lamp PlainResistor(string name, double ohms)
    {
        Check(ohms is >= 1e-3 and <= 1e7, nameof(ohms), ohms, "A resistor in a lamp's place has 0.001 to 1e7 ohm.");
        return new Lamp(name, double.NaN, double.NaN, LampFill.Resistor, ohms, null, LampTolerance.Resistor);
    }

    /// <summary>The same lamp under another name.</summary>
    public Lamp Named(string name) => new(name, RatedWatts, RatedVolts, Fill, ResistorOhms, Filament, Tolerance, curve);

    /// <summary>The same lamp with another filament: a calibrated one, or one of a Monte Carlo draw.</summary>
    /// <param name="filament">The other filament.</param>
    /// <param name="tolerance">How well it is known; null keeps what is said of this one.</param>
    public Lamp With(Filament filament, LampTolerance? tolerance = null) =>
        new(Name, RatedWatts, RatedVolts, Fill, ResistorOhms, filament, tolerance ?? Tolerance);

    internal Lamp WithOhms(double ohms) => new(Name, RatedWatts, RatedVolts, Fill, ohms, null, Tolerance);

    /// <summary>
    /// Share of the rated light: Wien's law at 0.58 micrometres, where the eye sees most of a filament's light. Near rating it rises
    /// as V^3.4, the published exponent.
    /// </summary>
    public double Glow(double kelvin)
    {
        const double SecondRadiationMetreKelvin = 0.014388;
        const double EffectiveMetres = 0.58e-6;
        return Filament is null ? double.NaN : Math.Exp(SecondRadiationMetreKelvin / EffectiveMetres * (1 / Filament.HotKelvin - 1 / kelvin));
    }

    /// <summary>The nameplate in words.</summary>
    public override string ToString() => Filament is null
        ? string.Create(CultureInfo.InvariantCulture, $"{ResistorOhms:0.###} ohm")
        : string.Create(CultureInfo.InvariantCulture, $"{RatedWatts:0.###} W {RatedVolts:0.###} V");

    /// <summary>
    /// Filament temperature at rated volts where nothing was measured: fitted to published lumens, good to 60 K (docs/model.md).
    /// </summary>
    internal static double AssumedHotKelvin(double watts, double volts, LampFill fill) => fill == LampFill.Gas
        ? 2790 + 250 * Math.Log10(watts / volts / 0.8)
        : 2450 + 150 * Math.Log10(watts / 25);

    private static void Check(bool good, string name, object? value, string message)
    {
        if (!good)
        {
            throw new ArgumentOutOfRangeException(name, value, message);
        }
    }
}
