using System.Text.Json.Serialization;
using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Host.Web.Live;

/// <summary>A bank as the page draws it.</summary>
/// <param name="Kind">lamp, resistor, series or parallel.</param>
/// <param name="Index">For a lamp: its place in the order of the bank's text, which is that of every list of lamps.</param>
/// <param name="Name">For a lamp or resistor: as written.</param>
/// <param name="Parts">For series and parallel.</param>
public sealed record BankTree(
    string Kind,
    [property: JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)] int? Index = null,
    [property: JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)] string? Name = null,
    [property: JsonIgnore(Condition = JsonIgnoreCondition.WhenWritingNull)] IReadOnlyList<BankTree>? Parts = null)
{
    /// <summary>The tree of a bank.</summary>
    public static BankTree Of(Bank bank)
    {
        var next = 0;
        return Of(bank.Root, ref next);
    }

    private static BankTree Of(BankPart part, ref int next)
    {
        switch (part)
        {
            case LampPart leaf:
                return new BankTree(leaf.Lamp.Filament is null ? "resistor" : "lamp", next++, leaf.Lamp.Name);
            case SeriesPart series:
                return new BankTree("series", Parts: All(series.Parts, ref next));
            case ParallelPart parallel:
                return new BankTree("parallel", Parts: All(parallel.Parts, ref next));
            default:
                throw new InvalidOperationException("A bank has lamps, series and parallel parts only.");
        }
    }

    private static List<BankTree> All(IReadOnlyList<BankPart> parts, ref int next)
    {
        var trees = new List<BankTree>(parts.Count);
        foreach (var part in parts)
        {
            trees.Add(Of(part, ref next));
        }

        return trees;
    }
}
