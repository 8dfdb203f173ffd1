using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Choosing;

/// <summary>
/// Every different bank that can be put together from a shelf of lamps without wiring acrobatics: lamps in parallel; two such groups in
/// series; three lamps in series; two lamps in series beside a group. Equal lamps are interchangeable, so no bank comes twice.
/// </summary>
internal static class BankCombinations
{
    /// <summary>The banks, as parts with their text.</summary>
    /// <param name="shelf">The lamps at hand.</param>
    public static IEnumerable<(string Text, BankPart Part)> Of(IReadOnlyList<Lamp> shelf)
    {
        var kinds = shelf.GroupBy(lamp => (lamp.RatedWatts, lamp.RatedVolts, lamp.Fill, lamp.Filament, lamp.ResistorOhms))
            .Select(group => (Lamp: group.First(), Count: group.Count())).ToArray();
        var groups = Subsets([.. kinds.Select(kind => kind.Count)]).Where(counts => counts.Any(count => count > 0)).ToArray();
        var all = kinds.Select(kind => kind.Count).ToArray();

        foreach (var group in groups)
        {
            yield return Parallel(kinds, group);
        }

        for (var first = 0; first < groups.Length; first++)
        {
            for (var second = first; second < groups.Length; second++)
            {
                if (Fits(all, groups[first], groups[second]))
                {
                    yield return Series([Parallel(kinds, groups[first]), Parallel(kinds, groups[second])]);
                }
            }
        }

        var pairs = Multisets(kinds.Length, 2, all).ToArray();
        foreach (var triple in Multisets(kinds.Length, 3, all))
        {
            yield return Series([.. Lamps(kinds, triple)]);
        }

        foreach (var pair in pairs)
        {
            foreach (var group in groups.Where(group => Fits(all, pair, group)))
            {
                var string2 = Series([.. Lamps(kinds, pair)]);
                var beside = Parallel(kinds, group);
                var parts = beside.Part is ParallelPart inner ? inner.Parts : [beside.Part];
                yield return ($"({string2.Text}) || {beside.Text}", new ParallelPart([string2.Part, .. parts]));
            }
        }
    }

    private static (string Text, BankPart Part) Parallel((Lamp Lamp, int Count)[] kinds, int[] counts)
    {
        var lamps = Lamps(kinds, counts).ToArray();
        return lamps.Length == 1 ? lamps[0] : (string.Join(" || ", lamps.Select(lamp => lamp.Text)), new ParallelPart([.. lamps.Select(lamp => lamp.Part)]));
    }

    // The contract's notation lets || bind tighter than +, so groups in series need no parentheses; for a reader they get them.
    private static (string Text, BankPart Part) Series((string Text, BankPart Part)[] parts) =>
        (string.Join(" + ", parts.Select(part => part.Part is LampPart ? part.Text : $"({part.Text})")), new SeriesPart([.. parts.Select(part => part.Part)]));

    private static IEnumerable<(string Text, BankPart Part)> Lamps((Lamp Lamp, int Count)[] kinds, int[] counts)
    {
        for (var kind = 0; kind < kinds.Length; kind++)
        {
            for (var copy = 0; copy < counts[kind]; copy++)
            {
                yield return (kinds[kind].Lamp.Name, new LampPart(kinds[kind].Lamp));
            }
        }
    }

    private static bool Fits(int[] all, int[] first, int[] second)
    {
        for (var kind = 0; kind < all.Length; kind++)
        {
            if (first[kind] + second[kind] > all[kind])
            {
                return false;
            }
        }

        return true;
    }

    private static IEnumerable<int[]> Subsets(int[] counts)
    {
        var current = new int[counts.Length];
        while (true)
        {
            yield return (int[])current.Clone();
            var place = 0;
            while (place < counts.Length && ++current[place] > counts[place])
            {
                current[place++] = 0;
            }

            if (place == counts.Length)
            {
                yield break;
            }
        }
    }

    private static IEnumerable<int[]> Multisets(int kinds, int size, int[] all) =>
        Subsets([.. all.Select(count => Math.Min(count, size))]).Where(counts => counts.Length == kinds && counts.Sum() == size);
}
