using System.Security.Cryptography;
using System.Text;

namespace Lampwarden.Host.Web.Access;

/// <summary>The secret that opens the page from other machines. It never leaves this class: only answers about it do. Thread-safe.</summary>
public sealed class PageToken
{
    /// <summary>Fewest characters: 24 of 64 kinds are 144 bits, which nobody guesses.</summary>
    public const int LeastCharacters = 24;

    private readonly byte[] _digest;
    private readonly byte[] _sessionKey;

    private PageToken(string token)
    {
        // Comparing digests takes the same time whatever the length of what was sent.
        _digest = SHA256.HashData(Encoding.UTF8.GetBytes(token));
        _sessionKey = HMACSHA256.HashData(Encoding.UTF8.GetBytes(token), "lampwarden page session"u8);
    }

    /// <summary>A new random token.</summary>
    public static string Make() => Convert.ToBase64String(RandomNumberGenerator.GetBytes(32)).TrimEnd('=').Replace('+', '-').Replace('/', '_');

    /// <summary>Reads the token of a file: its first line.</summary>
    /// <exception cref="FormatException">Too short, or not printable; the text does not hold the token.</exception>
    /// <exception cref="IOException">The file cannot be read.</exception>
    public static PageToken Read(string path)
    {
        var line = File.ReadLines(path).FirstOrDefault()?.Trim() ?? "";
        return line.Length >= LeastCharacters && line.All(letter => letter is > ' ' and < (char)127)
            ? new PageToken(line)
            : throw new FormatException($"its first line must be at least {LeastCharacters} printable characters without spaces; make one with 'lampwarden token {path}'");
    }

    /// <summary>Whether what was sent is the token.</summary>
    public bool Matches(string sent) => CryptographicOperations.FixedTimeEquals(_digest, SHA256.HashData(Encoding.UTF8.GetBytes(sent)));

    /// <summary>A pass for a browser, good until a time: made from the token, so it outlives a restart and dies with the token.</summary>
    public string MakePass(DateTimeOffset until)
    {
        var seconds = until.ToUnixTimeSeconds().ToString(System.Globalization.CultureInfo.InvariantCulture);
        return $"{seconds}.{Sign(seconds)}";
    }

    /// <summary>Whether a pass is ours and still good.</summary>
    public bool Accepts(string pass, DateTimeOffset now)
    {
        var dot = pass.IndexOf('.', StringComparison.Ordinal);
        if (dot < 1 || !long.TryParse(pass.AsSpan(0, dot), System.Globalization.NumberStyles.None, System.Globalization.CultureInfo.InvariantCulture, out var until))
        {
            return false;
        }

        var given = Encoding.ASCII.GetBytes(pass[(dot + 1)..]);
        var right = Encoding.ASCII.GetBytes(Sign(pass[..dot]));
        return CryptographicOperations.FixedTimeEquals(given, right) && now.ToUnixTimeSeconds() < until;
    }

    private string Sign(string seconds) => Convert.ToHexStringLower(HMACSHA256.HashData(_sessionKey, Encoding.ASCII.GetBytes(seconds)));
}
