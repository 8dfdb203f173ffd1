using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Units;

/// <summary>Reads a unit: its kind, then its ratings.</summary>
internal sealed class UnitParser(string text, Mains mains)
{
    private const string Kinds = "lamp, resistor, heater, transformer, rectifier, switch-mode, motor, half-wave, short or open";

    private readonly CircuitScanner scanner = new("unit", text, "rectifier 45 W 470 uF");

    public Unit Parse()
    {
        var start = scanner.Position;
        var kind = ReadKind();
        Unit unit = kind switch
        {
            "short" => ResistorUnit.Short,
            "open" => ResistorUnit.Open,
            "resistor" => new ResistorUnit(text.Trim(), ReadRange("ohm", "the resistance", 0.001, 1e7)),
            "lamp" => ReadLamp(),
            "heater" or "transformer" or "rectifier" or "switch-mode" or "motor" or "half-wave" =>
                throw scanner.Fault(start, $"a unit that this version can work out (resistor, lamp, short, open), found '{kind}'"),
            _ => throw scanner.Fault(start, $"the kind of unit ({Kinds}), found {scanner.Seen(start)}"),
        };
        scanner.ExpectEnd();
        return unit;
    }

    private string ReadKind()
    {
        // "lamp100 W" is "lamp 100 W": the space before a number is optional, so digits end the word.
        var start = scanner.Position;
        foreach (var kind in new[] { "switch-mode", "half-wave", "transformer", "rectifier", "resistor", "heater", "motor", "short", "lamp", "open" })
        {
            if (text.Length - start >= kind.Length && string.Compare(text, start, kind, 0, kind.Length, StringComparison.OrdinalIgnoreCase) == 0)
            {
                scanner.TryTake(text.Substring(start, kind.Length));
                return kind;
            }
        }

        return "";
    }

    private LampUnit ReadLamp()
    {
        var watts = ReadRange("W", "the lamp's watts", 1, 2000);
        var volts = scanner.AtNumber ? ReadRange("V", "the lamp's rated voltage", 2, 480) : mains.Volts;
        return new LampUnit(text.Trim(), Lamp.FromNameplate("unit", watts, volts));
    }

    private double ReadRange(string unit, string what, double least, double most)
    {
        var start = scanner.Position;
        var value = scanner.ReadQuantity(unit, what);
        return value >= least && value <= most
            ? value
            : throw scanner.Fault(start, FormattableString.Invariant($"{what} from {least} to {most} {unit}, found {scanner.Seen(start)}"));
    }
}
