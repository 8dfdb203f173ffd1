namespace Lampwarden.Analysis.Inference;

/// <summary>What kind of load the unit is: it decides what one current can tell.</summary>
public enum UnitNature
{
    /// <summary>In phase and sinusoidal: heaters, lamps, loaded transformers nearly. Everything follows from one current.</summary>
    Resistive,

    /// <summary>Out of phase: idle transformers, motors. Without the phase only bounds follow.</summary>
    Reactive,

    /// <summary>Peaky: rectifiers with reservoirs, switch-mode supplies. Without a model only bounds follow.</summary>
    Rectifying,
}
