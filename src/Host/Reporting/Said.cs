using System.Globalization;
using System.Text.Json;

namespace Lampwarden.Host.Reporting;

/// <summary>Numbers as a report prints them. What is not known is a dash.</summary>
internal static class Said
{
    public const string Unknown = "–";

    public static string Amps(double amps) => double.IsPositiveInfinity(amps) ? "overload" : Number(amps, amps is < 0.1 and > -0.1 ? "0.00000" : "0.0000", "A");

    public static string Volts(double volts) => Number(volts, "0.0", "V");

    public static string Watts(double watts) => Number(watts, "0.0", "W");

    public static string Percent(double percent) => Number(percent, "+0.0;-0.0;0.0", "%");

    public static string Number(double value, string format, string unit) =>
        double.IsFinite(value) ? $"{value.ToString(format, CultureInfo.InvariantCulture)} {unit}".TrimEnd() : Unknown;

    /// <summary>A length of time in the unit people think in.</summary>
    public static string Length(double seconds) => seconds switch
    {
        double.NaN => Unknown,
        < 60 => Number(seconds, "0.0", "s"),
        < 3600 => string.Create(CultureInfo.InvariantCulture, $"{Math.Floor(seconds / 60):0} min {seconds % 60:00} s"),
        _ => string.Create(CultureInfo.InvariantCulture, $"{Math.Floor(seconds / 3600):0} h {Math.Floor(seconds % 3600 / 60):00} min"),
    };

    /// <summary>An instant of the run: hours, minutes and seconds since switch-on.</summary>
    public static string At(double seconds) => double.IsFinite(seconds)
        ? string.Create(CultureInfo.InvariantCulture, $"{Math.Floor(seconds / 3600):0}:{Math.Floor(seconds % 3600 / 60):00}:{Math.Floor(seconds % 60):00}")
        : Unknown;

    public static string Utc(DateTimeOffset? utc) => utc?.UtcDateTime.ToString("yyyy-MM-dd HH:mm:ss 'UTC'", CultureInfo.InvariantCulture) ?? Unknown;

    /// <summary>A state's name as words: ReturnedUnacknowledged and returned-unacknowledged both become returned unacknowledged.</summary>
    public static string Words(string name) => string.Concat(name.Select((letter, index) =>
        char.IsUpper(letter) ? $"{(index > 0 && char.IsLower(name[index - 1]) ? " " : "")}{char.ToLowerInvariant(letter)}" : letter == '-' ? " " : letter.ToString()));

    /// <summary>A number within a JSON document; NaN where it is not there.</summary>
    public static double Within(string? json, params string[] path)
    {
        if (json is null)
        {
            return double.NaN;
        }

        using var document = JsonDocument.Parse(json);
        var at = document.RootElement;
        foreach (var name in path)
        {
            if (at.ValueKind != JsonValueKind.Object || !at.TryGetProperty(name, out at))
            {
                return double.NaN;
            }
        }

        return at.ValueKind == JsonValueKind.Number ? at.GetDouble() : double.NaN;
    }
}
