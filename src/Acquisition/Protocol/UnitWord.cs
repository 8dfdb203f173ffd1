using System.Diagnostics.CodeAnalysis;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>A unit as meters write it: A, mA, uA, V, mV, kV, with AC, DC or ~ before or behind.</summary>
/// <param name="Quantity">What it measures.</param>
/// <param name="PowerOfTen">Its size in A or V as a power of ten.</param>
/// <param name="Coupling">ac, dc, acDc, or null where the word says nothing.</param>
internal readonly record struct UnitWord(Quantity Quantity, int PowerOfTen, string? Coupling)
{
    /// <summary>Reads a unit; prefixes count their case, since m and M differ by nine decades, letters of the unit do not.</summary>
    public static bool TryParse(string text, [NotNullWhen(true)] out UnitWord? unit)
    {
        var rest = text.Trim().Replace("\u00C2\u00B5", "u", StringComparison.Ordinal).Replace('\u00B5', 'u');
        string? coupling = null;
        foreach (var word in (ReadOnlySpan<string>)["AC+DC", "AC", "DC", "~", "RMS"])
        {
            // 'A' is a unit and 'AC' a coupling: what remains must still be a unit.
            if (rest.Length > word.Length && rest.EndsWith(word, StringComparison.OrdinalIgnoreCase))
            {
                coupling ??= CouplingOf(word);
                rest = rest[..^word.Length].TrimEnd();
            }
            else if (rest.Length > word.Length && rest.StartsWith(word, StringComparison.OrdinalIgnoreCase))
            {
                coupling ??= CouplingOf(word);
                rest = rest[word.Length..].TrimStart();
            }
        }

        unit = (rest.Length, rest.Length > 0 ? char.ToUpperInvariant(rest[^1]) : ' ', rest.Length == 2 ? PowerOf(rest[0]) : 0) switch
        {
            (1 or 2, 'A', { } power) => new UnitWord(Quantity.LineCurrent, power, coupling),
            (1 or 2, 'V', { } power) => new UnitWord(Quantity.MainsVoltage, power, coupling),
            _ => null,
        };
        return unit is not null;
    }

    /// <summary>ac, dc or acDc out of a meter's word; null for a word that is none.</summary>
    public static string? CouplingOf(ReadOnlySpan<char> word) => word.Trim() switch
    {
        "AC+DC" or "ac+dc" or "ACDC" => "acDc",
        "AC" or "ac" or "~" => "ac",
        "DC" or "dc" or "=" => "dc",
        _ => null,
    };

    private static int? PowerOf(char prefix) => prefix switch
    {
        'n' => -9,
        'u' => -6,
        'm' => -3,
        'k' or 'K' => 3,
        'M' => 6,
        _ => null,
    };
}
