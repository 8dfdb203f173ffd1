using System.Globalization;

namespace Lampwarden.Analysis.Lamps;

/// <summary>The supply as the bench sees it.</summary>
/// <param name="Volts">RMS, 10 to 480.</param>
/// <param name="Hertz">40 to 70.</param>
public sealed record Mains(double Volts, double Hertz)
{
    /// <summary>Reads <c>120 V 60 Hz</c>.</summary>
    /// <exception cref="TextFormatException">The text is no mains, or a value lies outside its range.</exception>
    public static Mains Parse(string text)
    {
        var scanner = new CircuitScanner("mains", text, "120 V 60 Hz");
        var start = scanner.Position;
        var volts = scanner.ReadQuantity("V", "the mains voltage");
        if (volts is not (>= 10 and <= 480))
        {
            throw scanner.Fault(start, $"a mains of 10 to 480 V, found {scanner.Seen(start)}");
        }

        start = scanner.Position;
        var hertz = scanner.ReadQuantity("Hz", "the mains frequency");
        if (hertz is not (>= 40 and <= 70))
        {
            throw scanner.Fault(start, $"a frequency of 40 to 70 Hz, found {scanner.Seen(start)}");
        }

        scanner.ExpectEnd();
        return new Mains(volts, hertz);
    }

    /// <summary>The same text that <see cref="Parse"/> reads.</summary>
    public override string ToString() => string.Create(CultureInfo.InvariantCulture, $"{Volts:0.###} V {Hertz:0.###} Hz");
}
