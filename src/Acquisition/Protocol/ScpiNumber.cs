using System.Globalization;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>
/// Reads the decimal numeric response forms of IEEE 488.2 (NR1, NR2, NR3) and the special values of SCPI-1999 volume 1, 7.2.1:
/// 9.9E37 for infinity, which on a multimeter means overload, and 9.91E37 for not a number.
/// Nothing else is taken for a number: no decimal comma, no thousands separator, no hexadecimal, no words.
/// </summary>
public static class ScpiNumber
{
    private const double Infinity = 9.9e37;
    private const double NotANumber = 9.91e37;
    // The two differ by 1e-3 of their size, and meters print them with as few as three digits.
    private const double Tolerance = 1e-4;
    private const int LongestText = 320; // 255 digits (error -124 beyond), sign, point, exponent

    /// <summary>Reads a text, blanks around it allowed.</summary>
    /// <returns>A number, an overload, or a refusal naming what was seen. Never throws.</returns>
    public static MeterValue Read(ReadOnlySpan<byte> text)
    {
        text = TrimBlanks(text);
        if (text.IsEmpty || text.Length > LongestText || !TryScan(text, out var decimals, out var exponent))
        {
            return MeterValue.Refused(GapReason.NotANumber, $"{Excerpt.Of(text)} is not a number such as 0.412 or +4.12E-01");
        }

        var value = double.Parse(text, NumberStyles.Float, CultureInfo.InvariantCulture);
        var size = Math.Abs(value);
        if (Math.Abs(size - NotANumber) <= NotANumber * Tolerance)
        {
            return MeterValue.Refused(GapReason.MeterHasNoValue, "the meter answered 9.91E37, its word for not a number");
        }

        return size >= Infinity * (1 - Tolerance)
            ? MeterValue.Overload("the meter answered 9.9E37, its word for overload")
            : MeterValue.Number(value, Math.Clamp(decimals - exponent, 0, 30));
    }

    /// <summary>Cuts off blanks as IEEE 488.2 means them: every byte from 0 to 32.</summary>
    public static ReadOnlySpan<byte> TrimBlanks(ReadOnlySpan<byte> text)
    {
        var start = 0;
        var end = text.Length;
        while (start < end && text[start] <= 32)
        {
            start++;
        }

        while (end > start && text[end - 1] <= 32)
        {
            end--;
        }

        return text[start..end];
    }

    // [+-] digits [. digits] [E [+-] digits], at least one digit before the exponent.
    private static bool TryScan(ReadOnlySpan<byte> text, out int decimals, out int exponent)
    {
        decimals = exponent = 0;
        var at = text[0] is (byte)'+' or (byte)'-' ? 1 : 0;
        var whole = Digits(text, ref at);
        if (at < text.Length && text[at] == '.')
        {
            at++;
            decimals = Digits(text, ref at);
        }

        if (whole + decimals == 0)
        {
            return false;
        }

        if (at < text.Length && text[at] is (byte)'E' or (byte)'e')
        {
            at++;
            var negative = at < text.Length && text[at] == '-';
            at += at < text.Length && text[at] is (byte)'+' or (byte)'-' ? 1 : 0;
            var from = at;
            if (Digits(text, ref at) is 0 or > 5)
            {
                return false;
            }

            exponent = int.Parse(text[from..at], NumberStyles.None, CultureInfo.InvariantCulture) * (negative ? -1 : 1);
        }

        return at == text.Length;
    }

    private static int Digits(ReadOnlySpan<byte> text, ref int at)
    {
        var from = at;
        while (at < text.Length && text[at] is >= (byte)'0' and <= (byte)'9')
        {
            at++;
        }

        return at - from;
    }
}
