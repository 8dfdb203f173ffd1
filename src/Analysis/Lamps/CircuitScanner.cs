using System.Globalization;

namespace Lampwarden.Analysis.Lamps;

/// <summary>Reads the small languages of mains, banks and units: quantities, words and signs, with faults that mark their place.</summary>
internal sealed class CircuitScanner
{
    private const int LongestText = 2000;

    private static readonly string[] Units = ["ohm", "Ω", "Hz", "VA", "W", "V", "F", "A"];

    private readonly string subject;
    private readonly string text;
    private readonly string example;

    public CircuitScanner(string subject, string text, string example)
    {
        ArgumentNullException.ThrowIfNull(text);
        (this.subject, this.text, this.example) = (subject, text, example);
        if (text.Length > LongestText)
        {
            throw new TextFormatException($"{subject}: expected at most {LongestText} characters, found {text.Length}.", text, LongestText);
        }

        SkipSpace();
    }

    /// <summary>Place of the next character that is no space.</summary>
    public int Position { get; private set; }

    public bool AtEnd => Position >= text.Length;

    public bool AtNumber => !AtEnd && (char.IsAsciiDigit(text[Position]) || text[Position] is '.' or '-');

    public bool AtWord => !AtEnd && (char.IsLetter(text[Position]) || text[Position] == '_');

    /// <summary>Steps over a sign if it stands here.</summary>
    public bool TryTake(string sign)
    {
        if (string.CompareOrdinal(text, Position, sign, 0, sign.Length) != 0)
        {
            return false;
        }

        Position += sign.Length;
        SkipSpace();
        return true;
    }

    /// <summary>Steps over a whole word if it stands here, whatever its case.</summary>
    public bool TryTakeWord(string word)
    {
        var end = WordEnd(Position);
        if (end - Position != word.Length || string.Compare(text, Position, word, 0, word.Length, StringComparison.OrdinalIgnoreCase) != 0)
        {
            return false;
        }

        Position = end;
        SkipSpace();
        return true;
    }

    /// <summary>A name: a letter, then letters, digits, '-' and '_'.</summary>
    public string ReadWord()
    {
        var start = Position;
        Position = WordEnd(start);
        var word = text[start..Position];
        SkipSpace();
        return word;
    }

    /// <summary>A number with a prefix and exactly this unit, in SI.</summary>
    public double ReadQuantity(string unit, string what)
    {
        var start = Position;
        var value = ReadQuantity(what, out var found);
        return found == unit ? value : throw Fault(start, $"{what} in {unit}, found {Seen(start)}");
    }

    /// <summary>A number with one of the units known here.</summary>
    public double ReadQuantity(string what, out string unit)
    {
        var start = Position;
        if (!AtNumber)
        {
            throw Fault(start, $"{what}, found {Seen(start)}");
        }

        var end = start + 1;
        while (end < text.Length && (char.IsAsciiDigit(text[end]) || text[end] == '.'))
        {
            end++;
        }

        if (!double.TryParse(text.AsSpan(start, end - start), NumberStyles.Float, CultureInfo.InvariantCulture, out var value))
        {
            throw Fault(start, $"a number with a decimal point, found '{text[start..end]}'");
        }

        Position = end;
        SkipSpace();
        var unitStart = Position;
        while (!AtEnd && char.IsLetter(text[Position]))
        {
            Position++;
        }

        var (scale, name) = ReadUnit(text[unitStart..Position]);
        if (name.Length == 0)
        {
            Position = unitStart;
            throw Fault(unitStart, $"the unit of {text[start..end]} (W, V, ohm, F, VA or Hz), found {Seen(unitStart)}");
        }

        unit = name;
        SkipSpace();
        return value * scale;
    }

    public void ExpectEnd()
    {
        if (!AtEnd)
        {
            throw Fault(Position, $"the end of the text, found {Seen(Position)}");
        }
    }

    /// <summary>What stands from a place on, short enough for a message.</summary>
    public string Seen(int start)
    {
        if (start >= text.Length)
        {
            return "the end of the text";
        }

        var end = Math.Min(text.Length, Math.Max(Position, Math.Max(start + 1, WordEnd(start))));
        return $"'{text[start..end].TrimEnd()}'";
    }

    public TextFormatException Fault(int position, string expected) => new(
        $"{subject}: expected {expected}.\n  {text}\n  {new string(' ', position)}^\nWrite for example: {example}", text, position);

    private static (double Scale, string Unit) ReadUnit(string word)
    {
        foreach (var unit in Units)
        {
            if (word.EndsWith(unit, StringComparison.OrdinalIgnoreCase))
            {
                var scale = word[..^unit.Length] switch
                {
                    "" => 1,
                    "m" => 1e-3,
                    "k" => 1e3,
                    "u" or "µ" or "μ" => 1e-6,
                    _ => 0.0,
                };
                if (scale != 0)
                {
                    return (scale, unit == "Ω" ? "ohm" : unit);
                }
            }
        }

        return (0, "");
    }

    private int WordEnd(int start)
    {
        var end = start;
        while (end < text.Length && (char.IsLetterOrDigit(text[end]) || text[end] is '_' or '-'))
        {
            end++;
        }

        return end;
    }

    private void SkipSpace()
    {
        while (Position < text.Length && char.IsWhiteSpace(text[Position]))
        {
            Position++;
        }
    }
}
