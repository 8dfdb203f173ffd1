using System.Globalization;
using Lampwarden.Acquisition.Protocol;

namespace Lampwarden.Acquisition;

/// <summary>A fault of a meter's options that one option alone does not show.</summary>
/// <param name="Key">Path below the meter, such as protocol.pattern.</param>
/// <param name="Value">What was given.</param>
/// <param name="Rule">What is expected.</param>
public sealed record MeterFault(string Key, string? Value, string Rule);

/// <summary>Rules across a meter's options, and what to warn of though it is allowed. Ranges of single options stand at the options.</summary>
public static class MeterRules
{
    private const int BitsPerCharacter = 10; // start, 8 data, stop
    private const int CharactersPerReading = 16;

    /// <summary>Every fault of the options together; empty when they are good.</summary>
    public static IEnumerable<MeterFault> Faults(MeterOptions meter)
    {
        var protocol = meter.Protocol;
        if (meter.Transport.Kind == "tcp" && !(ushort.TryParse(meter.Transport.Port, NumberStyles.None, CultureInfo.InvariantCulture, out var port) && port > 0))
        {
            yield return new MeterFault("transport.port", meter.Transport.Port, "must be a number from 1 to 65535 for tcp; meters mostly listen on 5025");
        }

        if (protocol.Kind == "lines" && protocol.Pattern.Length == 0)
        {
            yield return new MeterFault("protocol.pattern", null, "must be given for lines; docs/meters.md shows how to describe a meter's lines");
        }

        if (protocol.Kind == "scpi" && (protocol.Query.Length == 0 || (protocol.Identify && !protocol.Query.Contains('?', StringComparison.Ordinal))))
        {
            yield return new MeterFault("protocol.query", protocol.Query, "must be a question, such as READ? or MEASure:CURRent:AC?");
        }

        if (protocol.Unit.Length > 0 && (!UnitWord.TryParse(protocol.Unit, out var unit) || unit.Value.Quantity != meter.Quantity))
        {
            yield return new MeterFault("protocol.unit", protocol.Unit, $"must be a unit of {(meter.Quantity == Quantity.LineCurrent ? "current, such as mA" : "voltage, such as V")}");
        }

        foreach (var pair in protocol.UnitWords.Where(pair => !TryPair(pair, out _, out var meaning) || !UnitWord.TryParse(meaning, out _)))
        {
            yield return new MeterFault("protocol.unitWords", pair, "must be word=unit, such as MAMP=mA");
        }

        foreach (var pair in protocol.ExponentWords.Where(pair => !TryPair(pair, out _, out var meaning)
            || !int.TryParse(meaning, NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture, out var power) || Math.Abs(power) > 20))
        {
            yield return new MeterFault("protocol.exponentWords", pair, "must be code=power of ten, such as 2=-3");
        }
    }

    /// <summary>What is allowed and yet worth a warning, one sentence each.</summary>
    public static IEnumerable<string> Warnings(MeterOptions meter)
    {
        var protocol = meter.Protocol;
        if (protocol.Kind == "scpi" && protocol.Pattern.Length == 0 && !HasFixedRange(protocol))
        {
            var (loss, setUp) = meter.Quantity == Quantity.LineCurrent
                ? ("when the current changes, and miss the inrush", "CONFigure:CURRent:AC 3")
                : ("when the mains changes", "CONFigure:VOLTage:AC 300");
            yield return $"no range is set, so the meter ranges by itself: it can be blind for a moment just {loss}. "
                + $"Set one, such as {setUp} in protocol.setUp with READ? as the query.";
        }

        if (protocol.Kind == "lines")
        {
            yield return "fix the range on the meter itself: while it ranges by itself it can be blind just when the current changes, and miss the inrush.";
        }

        if (meter.Transport.Kind == "serial" && meter.ReadingsPerSecond * BitsPerCharacter * CharactersPerReading > meter.Transport.BaudRate)
        {
            yield return string.Create(CultureInfo.InvariantCulture,
                $"{meter.ReadingsPerSecond} readings of some {CharactersPerReading} characters a second do not go through {meter.Transport.BaudRate} baud; at most {meter.Transport.BaudRate / BitsPerCharacter / CharactersPerReading} do.");
        }

        if (protocol.Kind == "scpi" && meter.WindowSeconds * meter.ReadingsPerSecond > 1.001)
        {
            yield return string.Create(CultureInfo.InvariantCulture,
                $"a window of {meter.WindowSeconds} s gives at most {1 / meter.WindowSeconds:0.###} fresh readings a second, and {meter.ReadingsPerSecond} are asked for.");
        }
    }

    internal static IEnumerable<(string Word, string Meaning)> Pairs(IEnumerable<string> pairs) =>
        pairs.Select(pair => TryPair(pair, out var word, out var meaning) ? (word, meaning) : throw new ArgumentException($"'{pair}' is not word=meaning"));

    private static bool TryPair(string pair, out string word, out string meaning)
    {
        var at = pair.LastIndexOf('=');
        (word, meaning) = at > 0 ? (pair[..at].Trim(), pair[(at + 1)..].Trim()) : ("", "");
        return at > 0;
    }

    // A range is fixed by an argument of CONFigure or MEASure, or by RANGe with a number.
    private static bool HasFixedRange(ProtocolOptions protocol)
    {
        var commands = protocol.SetUp.Append(protocol.Query).SelectMany(text => text.Split(';', StringSplitOptions.TrimEntries)).ToArray();
        var measures = commands.Any(command => command.TrimStart(':').StartsWith("MEAS", StringComparison.OrdinalIgnoreCase) && !HasNumber(command));
        return !measures && commands.Any(command => HasNumber(command)
            && (command.TrimStart(':').StartsWith("CONF", StringComparison.OrdinalIgnoreCase)
                || command.TrimStart(':').StartsWith("MEAS", StringComparison.OrdinalIgnoreCase)
                || (command.Contains("RANG", StringComparison.OrdinalIgnoreCase) && !command.Contains("AUTO", StringComparison.OrdinalIgnoreCase))));

        static bool HasNumber(string command) => command.IndexOf(' ', StringComparison.Ordinal) is > 0 and var space
            && command.AsSpan(space).TrimStart() is { Length: > 0 } argument && (char.IsAsciiDigit(argument[0]) || argument[0] == '.');
    }
}
