using System.Globalization;
using System.Numerics;

namespace Lampwarden.Fuzzing;

/// <summary>
/// What a line says, read in another way than the product does: character by character, in whole-number arithmetic, without regular
/// expressions and without the framework's number parser.
/// </summary>
internal static class SecondOpinion
{
    /// <summary>The number of a SCPI answer; NaN when it is none, or an overload, or the word for no value.</summary>
    public static double Scpi(ReadOnlySpan<byte> line)
    {
        var value = Number(Blank(line), 0);
        return Math.Abs(value) >= 9.9e37 * 0.9999 ? double.NaN : value;
    }

    /// <summary>What marks a line of a dialect as no reading; what <see cref="Dialect"/> looks for.</summary>
    public static IList<string> RefuseWords(string dialect) => dialect == "columns" ? ["H"] : ["HOLD", "LOBAT"];

    /// <summary>A in a line of one of the example dialects; NaN when it holds none.</summary>
    public static double Dialect(string dialect, ReadOnlySpan<byte> line)
    {
        var text = System.Text.Encoding.Latin1.GetString(Blank(line));
        switch (dialect)
        {
            case "words":
                var words = text.Split(' ', StringSplitOptions.RemoveEmptyEntries);
                return words is ["AC", var number, var unit] && text.StartsWith("AC ", StringComparison.Ordinal) && number.Contains('.', StringComparison.Ordinal)
                    && char.IsAsciiDigit(number[^1]) && !number.Contains('E', StringComparison.OrdinalIgnoreCase) && !number.StartsWith('.')
                    && !number.StartsWith("+.", StringComparison.Ordinal) && !number.StartsWith("-.", StringComparison.Ordinal)
                    ? Scaled(number, unit) : double.NaN;
            case "fields":
                var fields = text.Split(';');
                return fields is [("I" or "U"), [('+' or '-'), .. var digits] signed, var word, var flags]
                    && digits.All(one => one == '.' || char.IsAsciiDigit(one)) && digits.Length > 0 && char.IsAsciiDigit(digits[0]) && char.IsAsciiDigit(digits[^1])
                    && flags.All(one => one == ' ' || char.IsAsciiLetterUpper(one)) && !flags.Contains("HOLD", StringComparison.Ordinal)
                    && !flags.Contains("LOBAT", StringComparison.Ordinal)
                    ? Scaled(signed, word) : double.NaN;
            case "columns":
                // The flag is the last column, and a blank there is cut off with the line's end: such a line has no flag and is none.
                return text.Length == 12 && text[0] == 'A' && text[1] == '~' && text[2] is '+' or '-' && text[3..8].All(char.IsAsciiDigit)
                    && text[8] is '+' or '-' && char.IsAsciiDigit(text[9]) && text[10] == ' ' && char.ToUpperInvariant(text[11]) != 'H'
                    ? Number(System.Text.Encoding.Latin1.GetBytes(text[2..8]), int.Parse(text[8..10], NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture))
                    : double.NaN;
            default:
                throw new ArgumentException(dialect);
        }
    }

    /// <summary>Two readings of one number agree: the last bit may differ, since this side does not round as IEEE 754 asks.</summary>
    public static bool Agree(double one, double other) => one == other || Math.Abs(one - other) <= 1e-12 * Math.Abs(other);

    private static double Scaled(string number, string unit) => unit switch
    {
        "A" => Number(System.Text.Encoding.Latin1.GetBytes(number), 0),
        "mA" => Number(System.Text.Encoding.Latin1.GetBytes(number), -3),
        "uA" => Number(System.Text.Encoding.Latin1.GetBytes(number), -6),
        _ => double.NaN,
    };

    private static double Number(ReadOnlySpan<byte> text, int power)
    {
        var at = 0;
        var sign = 1;
        if (at < text.Length && text[at] is (byte)'+' or (byte)'-')
        {
            sign = text[at++] == '-' ? -1 : 1;
        }

        var mantissa = BigInteger.Zero;
        var (digits, point) = (0, false);
        for (; at < text.Length && (char.IsAsciiDigit((char)text[at]) || (text[at] == '.' && !point)); at++)
        {
            if (text[at] == '.')
            {
                point = true;
                continue;
            }

            mantissa = (mantissa * 10) + (text[at] - '0');
            power -= point ? 1 : 0;
            digits++;
        }

        if (digits == 0 || text.Length > 320)
        {
            return double.NaN;
        }

        if (at < text.Length && text[at] is (byte)'E' or (byte)'e')
        {
            at++;
            var negative = at < text.Length && text[at] == '-';
            at += at < text.Length && text[at] is (byte)'+' or (byte)'-' ? 1 : 0;
            var (exponent, count) = (0, 0);
            for (; at < text.Length && char.IsAsciiDigit((char)text[at]) && count < 6; at++, count++)
            {
                exponent = (exponent * 10) + (text[at] - '0');
            }

            if (count is 0 or > 5)
            {
                return double.NaN;
            }

            power += negative ? -exponent : exponent;
        }

        if (at != text.Length)
        {
            return double.NaN;
        }

        // Kept inside what BigInteger turns into a double well; beyond lies nothing a meter sends.
        return mantissa.IsZero || power < -400 ? 0 * sign
            : power > 400 ? double.PositiveInfinity
            : sign * (power >= 0 ? (double)(mantissa * BigInteger.Pow(10, power)) : Divide(mantissa, BigInteger.Pow(10, -power)));
    }

    private static double Divide(BigInteger dividend, BigInteger divisor)
    {
        var shift = Math.Max(0, 120 - (int)(dividend.GetBitLength() - divisor.GetBitLength()));
        return Math.ScaleB((double)((dividend << shift) / divisor), -shift);
    }

    private static ReadOnlySpan<byte> Blank(ReadOnlySpan<byte> text)
    {
        while (text.Length > 0 && text[0] <= 32)
        {
            text = text[1..];
        }

        while (text.Length > 0 && text[^1] <= 32)
        {
            text = text[..^1];
        }

        return text;
    }
}
