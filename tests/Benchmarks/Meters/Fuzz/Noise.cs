using System.Globalization;
using System.Text;

namespace Lampwarden.Fuzzing;

/// <summary>Random and spoilt lines from a seed: what wires, wrong baud rates and broken meters make of a line.</summary>
internal sealed class Noise(int seed)
{
    private const string Likely = "0123456789.+-EeAVmukO L;:~=#,*?ACD\t\0\r\n";
    private readonly Random _random = new(seed);

    public Random Random => _random;

    /// <summary>Bytes of any value.</summary>
    public byte[] Bytes(int longest)
    {
        var bytes = new byte[_random.Next(longest + 1)];
        _random.NextBytes(bytes);
        return bytes;
    }

    /// <summary>Characters that lines of meters are made of, in no order.</summary>
    public byte[] Soup(int longest) => [.. Enumerable.Range(0, _random.Next(longest + 1)).Select(_ => (byte)Likely[_random.Next(Likely.Length)])];

    /// <summary>A number as meters write it, with its value to the nearest double.</summary>
    public string Number()
    {
        var value = Math.Pow(10, (_random.NextDouble() * 8) - 5) * (_random.Next(4) == 0 ? -1 : 1);
        return _random.Next(5) switch
        {
            0 => value.ToString("+0.00000000E+00;-0.00000000E+00", CultureInfo.InvariantCulture),
            1 => value.ToString("0.000E+0", CultureInfo.InvariantCulture),
            2 => value.ToString("F4", CultureInfo.InvariantCulture),
            3 => value.ToString("F0", CultureInfo.InvariantCulture),
            _ => _random.Next(3) switch { 0 => "9.9E37", 1 => "+9.91000000E+37", _ => "-9.9E+37" },
        };
    }

    /// <summary>One to four blows to a line: a byte changed, put in, lost, doubled, two exchanged, the end or the beginning cut off.</summary>
    public byte[] Spoil(byte[] line)
    {
        var bytes = new List<byte>(line);
        for (var blows = _random.Next(1, 5); blows > 0; blows--)
        {
            var at = _random.Next(bytes.Count + 1);
            switch (_random.Next(7))
            {
                case 0 when at < bytes.Count:
                    bytes[at] = (byte)_random.Next(256);
                    break;
                case 1 when at < bytes.Count:
                    bytes[at] = (byte)Likely[_random.Next(Likely.Length)];
                    break;
                case 2:
                    bytes.Insert(at, (byte)Likely[_random.Next(Likely.Length)]);
                    break;
                case 3 when at < bytes.Count:
                    bytes.RemoveAt(at);
                    break;
                case 4 when at < bytes.Count:
                    bytes.Insert(at, bytes[at]);
                    break;
                case 5 when at + 1 < bytes.Count:
                    (bytes[at], bytes[at + 1]) = (bytes[at + 1], bytes[at]);
                    break;
                case 6:
                    bytes = _random.Next(2) == 0 ? bytes[..at] : bytes[at..];
                    break;
            }
        }

        return [.. bytes];
    }

    public static byte[] Ascii(string text) => Encoding.Latin1.GetBytes(text);
}
