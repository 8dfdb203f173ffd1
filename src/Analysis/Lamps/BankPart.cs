namespace Lampwarden.Analysis.Lamps;

/// <summary>A part of a bank: one lamp, or parts in series or in parallel.</summary>
public abstract record BankPart;

/// <summary>One lamp, or a plain resistor in a lamp's place.</summary>
public sealed record LampPart(Lamp Lamp) : BankPart;

/// <summary>Parts one after the other: they share the current.</summary>
public sealed record SeriesPart(IReadOnlyList<BankPart> Parts) : BankPart;

/// <summary>Parts side by side: they share the voltage.</summary>
public sealed record ParallelPart(IReadOnlyList<BankPart> Parts) : BankPart;
