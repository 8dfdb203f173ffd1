using System.CommandLine;
using System.Globalization;

namespace Lampwarden.Host.Commands;

/// <summary>Options that several commands share, made afresh for each.</summary>
internal static class CommonOptions
{
    /// <summary><c>--config F</c>.</summary>
    public static Option<string> Config() => new("--config")
    {
        Description = "Configuration file",
        HelpName = "F",
        DefaultValueFactory = _ => Configuration.ConfigurationFile.DefaultPath,
    };

    /// <summary><c>--record FOLDER</c>: where the store lies, over what the configuration says.</summary>
    public static Option<string?> Record() => new("--record") { Description = "Folder of the store", HelpName = "FOLDER" };

    /// <summary><c>--no-page</c>.</summary>
    public static Option<bool> NoPage() => new("--no-page") { Description = "Do not serve the local page" };

    /// <summary><c>--mains M</c>.</summary>
    public static Option<string> Mains() => new("--mains")
    {
        Description = "Mains, such as \"120 V 60 Hz\"",
        HelpName = "M",
        Required = true,
    };

    /// <summary>A length of time such as <c>90s</c>, <c>15m</c>, <c>2.5h</c>.</summary>
    /// <exception cref="BadInputException">The text is no length of time above zero.</exception>
    public static TimeSpan ParseDuration(string text)
    {
        var digits = text.TrimEnd('s', 'm', 'h');
        var seconds = (text.Length - digits.Length, text[^1..]) switch
        {
            (0, _) => 1,
            (1, "s") => 1,
            (1, "m") => 60,
            (1, "h") => 3600,
            _ => double.NaN,
        };
        if (double.TryParse(digits, NumberStyles.AllowDecimalPoint, CultureInfo.InvariantCulture, out var value) && value * seconds is > 0 and < 1e7)
        {
            return TimeSpan.FromSeconds(value * seconds);
        }

        throw new BadInputException($"--duration '{text}' is no length of time; expected a number above 0 with s, m or h, such as 90s.");
    }
}
