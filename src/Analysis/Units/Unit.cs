using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Units;

/// <summary>A unit under test: what stands behind the bank. Immutable and thread-safe.</summary>
public abstract class Unit
{
    private protected Unit(string text) => Text = text;

    /// <summary>The unit as the user wrote it.</summary>
    public string Text { get; }

    /// <summary>
    /// Reads <c>lamp 100 W</c>, <c>resistor 50 ohm</c>, <c>heater 800 W</c>, <c>transformer 60 VA</c>, <c>rectifier 45 W 470 uF</c>,
    /// <c>switch-mode 60 W</c>, <c>motor 200 W</c>, <c>half-wave 60 W</c>, <c>short</c> or <c>open</c>. Watts are what the unit takes at nominal mains.
    /// </summary>
    /// <exception cref="TextFormatException">The text is no unit.</exception>
    public static Unit Parse(string text, Mains mains) => new UnitParser(text, mains).Parse();

    /// <summary>The unit with its plate's watts times a factor: for uncertainties.</summary>
    internal abstract Unit Scaled(double factor);

    /// <summary>How well the plate's watts are known where nobody says better: relative, one sigma.</summary>
    internal virtual double DefaultUncertainty => 0.10;

    /// <summary>A model for time stepping.</summary>
    internal abstract UnitDynamics NewDynamics(Mains mains);

    /// <summary>A model for steady RMS work; it may keep scratch memory, so one per thread.</summary>
    internal abstract UnitResponse NewResponse(Mains mains);
}
