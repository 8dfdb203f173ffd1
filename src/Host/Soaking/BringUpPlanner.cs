using Lampwarden.Analysis.Choosing;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Soaking;

/// <summary>
/// Finds the steps by which a bank can be switched in lamp by lamp: the smallest part that carries the unit first. It may only leave
/// out lamps of the bank that stands there; which bank to make of the lamps on the shelf is <see cref="BankChooser"/>'s question.
/// </summary>
public static class BringUpPlanner
{
    /// <summary>The steps; the last is the whole bank. One step only where nothing can be left out.</summary>
    /// <param name="whole">The bench with its whole bank.</param>
    /// <param name="inventory">Lamps its bank text may name.</param>
    public static IReadOnlyList<BringUpStep> Steps(BenchPlan whole, LampInventory inventory)
    {
        var plans = new List<(BenchPlan Plan, string? Adds)>();
        var next = whole;
        var without = new HashSet<int>();
        while (Largest(whole.Bank, without) is { } lamp)
        {
            without.Add(lamp);
            plans.Add((next, whole.Bank.Lamps[lamp].Name));
            next = BenchPlan.From(whole.Options.With(bank: Without(whole.Bank.Root, without)!), inventory);
        }

        plans.Add((next, null));
        plans.Reverse();
        // A part that cannot carry the unit says nothing about it, and one so small that the unit is a short to it says little more.
        var steps = new List<(BenchPlan Plan, string Adds)>();
        var adds = new List<string>();
        foreach (var (plan, added) in plans)
        {
            adds.Add(added ?? plan.Bank.Text);
            if (ReferenceEquals(plan, whole) || (plan.Prediction.Steady.Exists && plan.Prediction.Contrast >= BringUpAdvice.LeastContrast))
            {
                steps.Add((plan, steps.Count == 0 ? plan.Bank.Text : string.Join(" and ", adds)));
                adds.Clear();
            }
        }

        return [.. steps.Select((step, index) => Step(step.Plan, step.Adds, index, steps.Count))];
    }

    private static BringUpStep Step(BenchPlan plan, string adds, int index, int count)
    {
        var (band, shorted) = (plan.Prediction.Band, plan.Prediction.Shorted.LineAmps);
        var why = index == 0
            ? $"The least that carries the unit: a short could draw no more than {Narration.Amps(shorted)}."
            : index == count - 1
                ? "The bank for the soak."
                : $"A little more: a short could draw {Narration.Amps(shorted)}.";
        return new BringUpStep(plan, adds, band.LowAmps, band.HighAmps, BringUpAdvice.StopAbove(band.HighAmps, shorted), why);
    }

    // The largest lamp that can be left out with a way for the current still there.
    private static int? Largest(Bank bank, HashSet<int> without)
    {
        var candidates = Enumerable.Range(0, bank.Lamps.Count)
            .Where(lamp => !without.Contains(lamp) && bank.Lamps[lamp].Filament is not null && Without(bank.Root, [.. without, lamp]) is not null)
            .OrderByDescending(lamp => bank.Lamps[lamp].RatedWatts);
        return candidates.Select(lamp => (int?)lamp).FirstOrDefault();
    }

    // The text of what is left of a part; null where it carries no current any more.
    private static string? Without(BankPart root, HashSet<int> without)
    {
        var next = 0;
        return Text(root, out _);

        string? Text(BankPart part, out bool compound)
        {
            compound = false;
            switch (part)
            {
                case LampPart leaf:
                    return without.Contains(next++) ? null : leaf.Lamp.Name;
                case SeriesPart series:
                    var chain = series.Parts.Select(inner => Wrapped(inner)).ToList();
                    compound = chain.Count > 1;
                    return chain.Contains(null) ? null : string.Join(" + ", chain);
                case ParallelPart parallel:
                    var branches = parallel.Parts.Select(inner => Wrapped(inner)).Where(text => text is not null).ToList();
                    compound = branches.Count > 1;
                    return branches.Count == 0 ? null : string.Join(" || ", branches);
                default:
                    throw new InvalidOperationException("A bank has lamps, series and parallel parts only.");
            }
        }

        string? Wrapped(BankPart part)
        {
            var text = Text(part, out var compound);
            return compound && text is not null ? $"({text})" : text;
        }
    }
}
