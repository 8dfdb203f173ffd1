namespace Lampwarden.Analysis.Lamps;

/// <summary>Lamps in series and parallel, to any depth. Immutable and thread-safe.</summary>
public sealed class Bank
{
    /// <param name="text">What the user wrote, or would write.</param>
    /// <param name="root">The outermost part.</param>
    /// <param name="notes">What was assumed in reading the text.</param>
    public Bank(string text, BankPart root, IReadOnlyList<string>? notes = null)
    {
        (Text, Root, Notes) = (text, root, notes ?? []);
        Network = new BankNetwork(root);
    }

    /// <summary>The bank in circuit notation.</summary>
    public string Text { get; }

    /// <summary>The outermost part.</summary>
    public BankPart Root { get; }

    /// <summary>What was assumed, such as a rated voltage that was not given.</summary>
    public IReadOnlyList<string> Notes { get; }

    /// <summary>Every lamp, in the order of the text.</summary>
    public IReadOnlyList<Lamp> Lamps => Network.Lamps;

    /// <summary>Resistance of the cold bank in ohms.</summary>
    public double ColdOhms => Cold(Root);

    /// <summary>Sum of the nameplates in W; NaN where the bank has no lamp at all.</summary>
    public double RatedWatts => Lamps.All(lamp => lamp.Filament is null) ? double.NaN : Lamps.Where(lamp => lamp.Filament is not null).Sum(lamp => lamp.RatedWatts);

    internal BankNetwork Network { get; }

    /// <summary>
    /// Reads circuit notation: <c>60 W</c>, <c>60 W 230 V</c>, an inventory name, <c>8 ohm</c>; <c>||</c> parallel, which binds
    /// tighter than <c>+</c> series; parentheses.
    /// </summary>
    /// <param name="text">Such as <c>(75 W || 25 W) + 150 W</c>.</param>
    /// <param name="mains">A lamp without volts is taken as rated for this mains, and <see cref="Notes"/> says so.</param>
    /// <param name="inventory">Lamps known by name.</param>
    /// <exception cref="TextFormatException">The text is no bank.</exception>
    public static Bank Parse(string text, Mains mains, LampInventory? inventory = null) =>
        new BankParser(text, mains, inventory ?? LampInventory.Empty).Parse();

    /// <summary>The same circuit with other lamps in the same places.</summary>
    public Bank With(IReadOnlyList<Lamp> lamps)
    {
        var next = 0;
        return new Bank(Text, Replace(Root), Notes);

        BankPart Replace(BankPart part) => part switch
        {
            LampPart => new LampPart(lamps[next++]),
            SeriesPart series => new SeriesPart([.. series.Parts.Select(Replace)]),
            ParallelPart parallel => new ParallelPart([.. parallel.Parts.Select(Replace)]),
            _ => throw new InvalidOperationException("A bank has lamps, series and parallel parts only."),
        };
    }

    private static double Cold(BankPart part) => part switch
    {
        LampPart leaf => leaf.Lamp.ColdOhms,
        SeriesPart series => series.Parts.Sum(Cold),
        ParallelPart parallel => 1 / parallel.Parts.Sum(inner => 1 / Cold(inner)),
        _ => throw new InvalidOperationException("A bank has lamps, series and parallel parts only."),
    };
}
