using System.Globalization;
using System.Text;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>Bytes as a person can read them in a message: quoted, control bytes named, cut to a sensible length.</summary>
internal static class Excerpt
{
    private const int Longest = 48;

    public static string Of(ReadOnlySpan<byte> bytes)
    {
        var text = new StringBuilder("'", Longest + 32);
        foreach (var one in bytes[..Math.Min(bytes.Length, Longest)])
        {
            if (one is >= 0x20 and < 0x7F)
            {
                text.Append((char)one);
            }
            else
            {
                text.Append(CultureInfo.InvariantCulture, $"<{one:X2}>");
            }
        }

        text.Append('\'');
        if (bytes.Length > Longest)
        {
            text.Append(CultureInfo.InvariantCulture, $" and {bytes.Length - Longest} bytes more");
        }

        return text.ToString();
    }
}
