namespace Lampwarden.Analysis.Lamps;

/// <summary>
/// A bank flattened for solving: parts in an order in which every part stands before the one that holds it, so that one run forward
/// joins resistances and one run backward shares out the current. Immutable and thread-safe.
/// </summary>
internal sealed class BankNetwork
{
    /// <summary>The holding part of each part; -1 for the whole bank, which stands last.</summary>
    public readonly int[] Parent;

    /// <summary>Index of the lamp, or -1 for a series or parallel part.</summary>
    public readonly int[] Leaf;

    /// <summary>True where a part's own parts stand side by side.</summary>
    public readonly bool[] IsParallel;

    public readonly Lamp[] Lamps;

    public BankNetwork(BankPart root)
    {
        var parents = new List<int>();
        var leaves = new List<int>();
        var parallels = new List<bool>();
        var lamps = new List<Lamp>();
        Add(root);
        (Parent, Leaf, IsParallel, Lamps) = ([.. parents], [.. leaves], [.. parallels], [.. lamps]);

        int Add(BankPart part)
        {
            var inner = part switch
            {
                SeriesPart series => series.Parts,
                ParallelPart parallel => parallel.Parts,
                _ => [],
            };
            var children = inner.Select(Add).ToArray();
            var own = parents.Count;
            parents.Add(-1);
            leaves.Add(part is LampPart ? lamps.Count : -1);
            parallels.Add(part is ParallelPart);
            if (part is LampPart leaf)
            {
                lamps.Add(leaf.Lamp);
            }

            foreach (var child in children)
            {
                parents[child] = own;
            }

            return own;
        }
    }
}
