using System.Globalization;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Choosing;

/// <summary>Ranks the banks that a shelf of lamps can make for one unit, and plans the way from a timid bank to a bold one.</summary>
public static class BankChooser
{
    /// <summary>The shelf taken where the user names none: what most benches have.</summary>
    public const string UsualShelf = "25 W, 40 W, 60 W, 60 W, 100 W, 100 W, 150 W";

    private const int MostLamps = 10;

    // Below this share of mains many units misbehave; above the other one they hardly notice the bank.
    private const double StarvingShare = 0.5;

    // Healthy and shorted bands of nameplate lamps (some 8 % each side) touch below this contrast.
    private const double HidingContrast = 1.3;

    // A short that draws so many times the unit's own current at full mains is hardly limited.
    private const double ThroughFactor = 12;

    /// <summary>Ranks and plans.</summary>
    /// <param name="mains">The supply.</param>
    /// <param name="unit">What is to run.</param>
    /// <param name="shelf">1 to 10 lamps.</param>
    /// <param name="most">How many choices to give.</param>
    /// <exception cref="ArgumentException">No lamp, or more than ten.</exception>
    public static BankChoices Choose(Mains mains, Unit unit, IReadOnlyList<Lamp> shelf, int most = 40)
    {
        if (shelf.Count is 0 or > MostLamps)
        {
            throw new ArgumentException($"Choosing works with 1 to {MostLamps} lamps at hand, found {shelf.Count}: name the ones you would use.", nameof(shelf));
        }

        var combinations = BankCombinations.Of(shelf).ToArray();
        var hot = shelf.Sum(lamp => lamp.Filament?.HotOhms ?? lamp.ResistorOhms);
        var cold = 1 / shelf.Sum(lamp => 1 / lamp.ColdOhms);
        var table = new UnitTable(mains, unit, 0.9 * cold, 1.5 * hot);
        var ownAmps = unit is ResistorUnit { Ohms: 0 } ? double.PositiveInfinity : unit.NewResponse(mains).At(mains.Volts, 1e-3).Amps;
        var ranked = combinations.Select(combination => Judge(mains, table, combination.Text, combination.Part, ownAmps))
            .OrderBy(choice => Order(choice.Verdict)).ThenByDescending(choice => Merit(choice, ownAmps)).ThenBy(choice => choice.Bank.Length).ToArray();
        var parts = combinations.ToDictionary(combination => combination.Text, combination => combination.Part, StringComparer.Ordinal);
        var checkedFirst = ConfirmBest(mains, unit, ranked, parts);
        var notes = new List<string> { "Every step still needs a look at the lamps: a lamp at full light means that the unit takes the whole current." };
        if (unit is MotorUnit)
        {
            notes.Add("Whether a motor gets going was tried in simulation for the best choices only.");
        }

        return new BankChoices([.. checkedFirst.Take(most)], BringUp(mains, unit, checkedFirst, parts), combinations.Length, notes);
    }

    private static BankChoice Judge(Mains mains, UnitTable table, string text, BankPart part, double ownAmps)
    {
        var solver = new BankSolver(new Bank(text, part));
        var shorted = solver.Feed(mains.Volts, 0);
        var exists = table.TryMeet(solver, out var amps, out var volts);
        var (share, contrast) = (volts / mains.Volts, shorted / amps);
        var (verdict, reason) = !exists
            ? ("cannot-run", "The bank cannot carry the unit: it would stop, or start and stop for ever.")
            : contrast < HidingContrast
                ? ("hides-short", Text($"A short draws only {contrast:0.00} times the healthy current: the two bands touch, so the meter could not tell them apart."))
                : share < StarvingShare
                    ? ("starves", Text($"The unit keeps {100 * share:0} % of its voltage: good for a first trial, not for a soak."))
                    : shorted > ThroughFactor * ownAmps
                        ? ("lets-through", Text($"A short would draw {shorted:0.##} A, {shorted / ownAmps:0} times the unit's own current: little limiting is left."))
                        : ("fits", Text($"The unit keeps {100 * share:0} % of its voltage, and a short draws {contrast:0.0} times the healthy current."));
        return new BankChoice(text, amps, volts, share, shorted, contrast, exists, verdict, reason);
    }

    private static int Order(string verdict) => verdict switch
    {
        "fits" => 0,
        "lets-through" => 1,
        "starves" => 2,
        "hides-short" => 3,
        _ => 4,
    };

    // Voltage kept, contrast, and a short that stays mild: each from 0 to 1, multiplied. What is easier to wire wins a near tie.
    private static double Merit(BankChoice choice, double ownAmps)
    {
        if (!choice.Exists)
        {
            return -choice.ShortedAmps;
        }

        var kept = Math.Clamp((choice.UnitVoltsShare - 0.4) / 0.5, 0.01, 1);
        var telling = 1 - 1 / Math.Max(choice.Contrast, 1.001);
        var through = double.IsInfinity(ownAmps) ? choice.ShortedAmps : choice.ShortedAmps / (6 * ownAmps);
        return kept * telling / (1 + through * through) * Ease(choice.Bank);
    }

    private static double Ease(string bank) =>
        Math.Pow(0.985, bank.Count(sign => sign == '|') / 2) * Math.Pow(0.97, bank.Count(sign => sign == '+')) * Math.Pow(0.98, bank.Count(sign => sign == '('));

    // The table cannot know whether a motor gets up to speed; the first choices are tried in time until six turn.
    private static List<BankChoice> ConfirmBest(Mains mains, Unit unit, BankChoice[] ranked, Dictionary<string, BankPart> parts)
    {
        var result = new List<BankChoice>();
        var refused = new List<BankChoice>();
        var confirmed = 0;
        foreach (var choice in ranked)
        {
            if (unit is not MotorUnit || !choice.Exists || confirmed >= 6)
            {
                result.Add(choice);
                continue;
            }

            if (BenchState.Turns(mains, new Bank(choice.Bank, parts[choice.Bank]), unit, 0))
            {
                confirmed++;
                result.Add(choice);
            }
            else
            {
                refused.Add(choice with { Exists = false, Verdict = "cannot-run", Reason = "The motor does not get going behind this bank.", LineAmps = double.NaN, UnitVolts = double.NaN, UnitVoltsShare = double.NaN, Contrast = double.NaN });
            }
        }

        result.AddRange(refused);
        return result;
    }

    private static List<BringUpAdvice> BringUp(Mains mains, Unit unit, List<BankChoice> choices, Dictionary<string, BankPart> parts)
    {
        var steps = new List<BringUpAdvice>();
        if (choices.Count == 0 || choices[0].Verdict is not ("fits" or "lets-through" or "starves"))
        {
            return steps;
        }

        var goal = choices[0];
        var usable = choices.Where(choice => choice.Exists && choice.Contrast >= BringUpAdvice.LeastContrast && choice.ShortedAmps <= goal.ShortedAmps)
            .OrderBy(choice => choice.ShortedAmps).ToArray();
        var last = 0.0;
        foreach (var choice in Ladder(usable, goal))
        {
            if (choice.ShortedAmps <= last * 1.2)
            {
                continue;
            }

            last = choice.ShortedAmps;
            var prediction = Predictor.Predict(mains, new Bank(choice.Bank, parts[choice.Bank]), unit, new PredictionSettings { WithIntervals = false });
            if (!prediction.Steady.Exists)
            {
                continue;
            }

            var (low, high) = (prediction.Band.LowAmps, prediction.Band.HighAmps);
            var why = steps.Count == 0
                ? Text($"The most timid: even a dead short draws no more than {choice.ShortedAmps:0.###} A; the unit gets {100 * choice.UnitVoltsShare:0} % of its voltage.")
                : choice.Bank == goal.Bank
                    ? Text($"The bank for the soak: {100 * choice.UnitVoltsShare:0} % of the voltage, contrast {choice.Contrast:0.0}.")
                    : Text($"More voltage ({100 * choice.UnitVoltsShare:0} %), a short still held to {choice.ShortedAmps:0.###} A.");

            steps.Add(new BringUpAdvice(choice.Bank, low, high, BringUpAdvice.StopAbove(high, choice.ShortedAmps), why));
        }

        return steps;
    }

    // The most timid, then banks whose short draws about twice as much each time, simple ones first, up to the goal.
    private static IEnumerable<BankChoice> Ladder(BankChoice[] usable, BankChoice goal)
    {
        if (usable.Length == 0)
        {
            yield break;
        }

        var timid = usable[0];
        yield return timid;
        var span = Math.Log(goal.ShortedAmps / timid.ShortedAmps);
        var rungs = (int)Math.Clamp(Math.Round(span / Math.Log(2)), 1, 4);
        for (var rung = 1; rung < rungs; rung++)
        {
            var wanted = timid.ShortedAmps * Math.Exp(span * rung / rungs);
            yield return usable.OrderBy(choice => Math.Abs(Math.Log(choice.ShortedAmps / wanted)) + 0.02 * choice.Bank.Length).First();
        }

        yield return goal;
    }

    private static string Text(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
