using System.Globalization;

namespace Lampwarden.Analysis.Lamps;

/// <summary>
/// Grammar: bank = row { '+' row }; row = item { '||' item }; item = '(' bank ')' | watts 'W' [ volts 'V' ] [ 'gas' | 'vacuum' ] | ohms 'ohm' | name.
/// </summary>
internal sealed class BankParser(string text, Mains mains, LampInventory inventory)
{
    private const int MostLamps = 200;
    private const int Deepest = 40;

    private readonly CircuitScanner scanner = new("bank", text, "(75 W || 25 W) + 150 W");
    private readonly Dictionary<(double Watts, double Volts, LampFill? Fill), Lamp> same = [];
    private readonly Dictionary<string, int> uses = new(StringComparer.OrdinalIgnoreCase);
    private readonly SortedSet<string> assumed = new(StringComparer.Ordinal);
    private int lamps;

    public Bank Parse()
    {
        var root = ReadSeries(0);
        scanner.ExpectEnd();
        var notes = assumed.Count == 0
            ? Array.Empty<string>()
            : [$"Rated volts not given for {string.Join(", ", assumed)}: taken as made for {mains.Volts.ToString(CultureInfo.InvariantCulture)} V. A lamp made for another voltage needs it written, as in \"60 W 130 V\"."];
        return new Bank(text.Trim(), root, notes);
    }

    private BankPart ReadSeries(int depth)
    {
        var parts = new List<BankPart> { ReadParallel(depth) };
        while (scanner.TryTake("+"))
        {
            parts.Add(ReadParallel(depth));
        }

        return parts.Count == 1 ? parts[0] : new SeriesPart(parts);
    }

    private BankPart ReadParallel(int depth)
    {
        var parts = new List<BankPart> { ReadItem(depth) };
        while (scanner.TryTake("||"))
        {
            parts.Add(ReadItem(depth));
        }

        return parts.Count == 1 ? parts[0] : new ParallelPart(parts);
    }

    private BankPart ReadItem(int depth)
    {
        var start = scanner.Position;
        if (scanner.TryTake("("))
        {
            if (depth >= Deepest)
            {
                throw scanner.Fault(start, $"at most {Deepest} nested parentheses");
            }

            var inner = ReadSeries(depth + 1);
            return scanner.TryTake(")") ? inner : throw scanner.Fault(scanner.Position, $"')', '||' or '+', found {scanner.Seen(scanner.Position)}");
        }

        if (++lamps > MostLamps)
        {
            throw scanner.Fault(start, $"at most {MostLamps} lamps");
        }

        if (scanner.AtNumber)
        {
            return new LampPart(Distinct(ReadRating(start)));
        }

        if (!scanner.AtWord)
        {
            throw scanner.Fault(start, $"a lamp such as 60 W, a name from the lamp inventory, or '(', found {scanner.Seen(start)}");
        }

        var name = scanner.ReadWord();
        if (inventory.TryGet(name, out var known))
        {
            return new LampPart(Distinct(known));
        }

        var names = inventory.Names.Count == 0 ? "the inventory is empty" : "it holds " + string.Join(", ", inventory.Names);
        throw scanner.Fault(start, $"a lamp such as 60 W or a name from the lamp inventory ({names}), found '{name}'");
    }

    private Lamp ReadRating(int start)
    {
        var value = scanner.ReadQuantity("a lamp's watts or a resistor's ohms", out var unit);
        if (unit == "ohm")
        {
            return value is >= 1e-3 and <= 1e7
                ? Lamp.PlainResistor(Written(start), value)
                : throw scanner.Fault(start, $"a resistor of 0.001 to 1e7 ohm, found {scanner.Seen(start)}");
        }

        if (unit != "W" || value is not (>= 1 and <= 2000))
        {
            throw scanner.Fault(start, $"a lamp of 1 to 2000 W, found {scanner.Seen(start)}");
        }

        var volts = double.NaN;
        if (scanner.AtNumber)
        {
            var voltsStart = scanner.Position;
            volts = scanner.ReadQuantity("V", "the lamp's rated voltage");
            if (volts is not (>= 2 and <= 480))
            {
                throw scanner.Fault(voltsStart, $"a rated voltage of 2 to 480 V, found {scanner.Seen(voltsStart)}");
            }
        }

        LampFill? fill = scanner.TryTakeWord("gas") ? LampFill.Gas : scanner.TryTakeWord("vacuum") ? LampFill.Vacuum : null;
        var written = Written(start);
        if (double.IsNaN(volts))
        {
            volts = mains.Volts;
            assumed.Add(written);
        }

        // Equal lamps share one object and so one curve.
        if (!same.TryGetValue((value, volts, fill), out var lamp))
        {
            lamp = Lamp.FromNameplate(written, value, volts, fill);
            same.Add((value, volts, fill), lamp);
        }

        return lamp;
    }

    private string Written(int start) => text[start..scanner.Position].Trim();

    // The second 75 W is called "75 W (2)", so that a table of lamps can be read.
    private Lamp Distinct(Lamp lamp)
    {
        var count = uses.GetValueOrDefault(lamp.Name) + 1;
        uses[lamp.Name] = count;
        return count == 1 ? lamp : lamp.Named(string.Create(CultureInfo.InvariantCulture, $"{lamp.Name} ({count})"));
    }
}
