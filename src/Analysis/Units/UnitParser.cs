using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Units;

/// <summary>
/// Reads a unit: its kind, then its ratings, of which those in brackets may be left out:
/// resistor R; lamp W [V]; heater W [cold R]; transformer VA [load W]; rectifier W C [R]; half-wave W [C [R]], half-wave R or
/// half-wave short; switch-mode W [C] [start V] [stop V]; motor W; short; open.
/// </summary>
internal sealed class UnitParser(string text, Mains mains)
{
    private const string Names = "lamp, resistor, heater, transformer, rectifier, switch-mode, motor, half-wave, short or open";

    private static readonly string[] Kinds =
        ["switch-mode", "half-wave", "transformer", "rectifier", "resistor", "heater", "motor", "short", "lamp", "open"];

    private readonly CircuitScanner scanner = new("unit", text, "rectifier 45 W 470 uF");

    public Unit Parse()
    {
        var start = scanner.Position;
        var written = text.Trim();
        Unit unit = ReadKind() switch
        {
            "short" => ResistorUnit.Short,
            "open" => ResistorUnit.Open,
            "resistor" => new ResistorUnit(written, ReadRange("ohm", "the resistance", 0.001, 1e7)),
            "lamp" => ReadLamp(written),
            "heater" => ReadHeater(written),
            "transformer" => ReadTransformer(written),
            "rectifier" => new RectifierUnit(written, ReadWatts(0.1), ReadFarads("the reservoir capacitor"), ReadInnerOhms(), true, mains),
            "half-wave" => ReadHalfWave(written),
            "switch-mode" => ReadSwitchMode(written),
            "motor" => new MotorUnit(written, ReadWatts(5), mains),
            _ => throw scanner.Fault(start, $"the kind of unit ({Names}), found {scanner.Seen(start)}"),
        };
        scanner.ExpectEnd();
        return unit;
    }

    // "lamp100 W" is "lamp 100 W": the space before a number is optional, so a digit may end the word.
    private string ReadKind()
    {
        var start = scanner.Position;
        foreach (var kind in Kinds)
        {
            var end = start + kind.Length;
            if (text.Length >= end
                && string.Compare(text, start, kind, 0, kind.Length, StringComparison.OrdinalIgnoreCase) == 0
                && (text.Length == end || !char.IsLetter(text[end])))
            {
                scanner.TryTake(text[start..end]);
                return kind;
            }
        }

        return "";
    }

    private LampUnit ReadLamp(string written)
    {
        var watts = ReadRange("W", "the lamp's watts", 1, 2000);
        var volts = scanner.AtNumber ? ReadRange("V", "the lamp's rated voltage", 2, 480) : mains.Volts;
        return new LampUnit(written, Lamp.FromNameplate("unit", watts, volts));
    }

    private HeaterUnit ReadHeater(string written)
    {
        var watts = ReadWatts(1, 20_000);
        scanner.TryTakeWord("cold");
        var start = scanner.Position;
        var cold = scanner.AtNumber ? ReadRange("ohm", "the cold resistance", 0.01, 1e6) : double.NaN;
        var hot = mains.Volts * mains.Volts / watts;
        return cold > hot * 1.001
            ? throw scanner.Fault(start, FormattableString.Invariant($"a cold resistance of at most the hot one, {hot:0.###} ohm, found {scanner.Seen(start)}"))
            : new HeaterUnit(written, watts, mains.Volts, cold);
    }

    private TransformerUnit ReadTransformer(string written)
    {
        var rating = ReadRange("VA", "the rating", 1, 10_000);
        var load = scanner.AtNumber ? ReadRange("W", "the load", 0, rating) : 0;
        return new TransformerUnit(written, rating, load, mains);
    }

    private Unit ReadHalfWave(string written)
    {
        if (scanner.TryTakeWord("short"))
        {
            return new HalfWaveUnit(written, 0);
        }

        var start = scanner.Position;
        var value = scanner.ReadQuantity("the watts or ohms behind the diode", out var unit);
        if (unit == "ohm" && value is > 0 and <= 1e7)
        {
            return new HalfWaveUnit(written, value);
        }

        if (unit != "W" || value is not (>= 0.1 and <= 5000))
        {
            throw scanner.Fault(start, $"the watts (0.1 to 5000 W) or ohms behind the diode, or 'short', found {scanner.Seen(start)}");
        }

        return scanner.AtNumber
            ? new RectifierUnit(written, value, ReadFarads("the reservoir capacitor"), ReadInnerOhms(), false, mains)
            : HalfWaveUnit.FromWatts(written, value, mains);
    }

    private SwitchModeUnit ReadSwitchMode(string written)
    {
        var watts = ReadWatts(0.5);
        var farads = scanner.AtNumber ? ReadFarads("the bulk capacitor") : double.NaN;
        var begin = scanner.TryTakeWord("start") ? ReadRange("V", "the mains voltage at which it starts", 5, 400) : SwitchModeUnit.DefaultStartVolts;
        var start = scanner.Position;
        var stop = scanner.TryTakeWord("stop") ? ReadRange("V", "the mains voltage at which it stops", 3, 400) : Math.Min(SwitchModeUnit.DefaultStopVolts, 0.9 * begin);
        return stop < begin
            ? new SwitchModeUnit(written, watts, farads, begin, stop, mains)
            : throw scanner.Fault(start, $"a stop voltage below the start voltage, found {scanner.Seen(start)}");
    }

    private double ReadWatts(double least, double most = 5000) => ReadRange("W", "the watts it takes at nominal mains", least, most);

    private double ReadFarads(string what) => ReadRange("F", what, 1e-7, 0.1);

    private double ReadInnerOhms() => scanner.AtNumber ? ReadRange("ohm", "the resistance before the capacitor", 0.01, 1000) : RectifierUnit.DefaultInnerOhms;

    private double ReadRange(string unit, string what, double least, double most)
    {
        var start = scanner.Position;
        var value = scanner.ReadQuantity(unit, what);
        return value >= least && value <= most
            ? value
            : throw scanner.Fault(start, FormattableString.Invariant($"{what} from {least} to {most} {unit}, found {scanner.Seen(start)}"));
    }
}
