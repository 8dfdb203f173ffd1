using System.CommandLine;
using System.Globalization;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Commands;

/// <summary>Where the store of a review command lies: <c>--record</c>, else what the configuration says, else the default.</summary>
internal static class RecordFolder
{
    public static string Of(string? record, string config) =>
        record ?? (File.Exists(config) ? ConfigurationFile.Load(config).Recording.Folder : new RecordingOptions().Folder);

    /// <summary>Opens the store to look, beside a recording program if there is one.</summary>
    public static SoakStore Open(ParseResult parsed, Option<string?> record, Option<string> config) =>
        SoakStore.Open(Of(parsed.GetValue(record), parsed.GetValue(config)!), TimeProvider.System, StoreMode.Review);

    /// <summary>A UTC date or time of the command line.</summary>
    /// <exception cref="BadInputException">It is none.</exception>
    public static DateTimeOffset? ParseUtc(string option, string? text)
    {
        if (text is null)
        {
            return null;
        }

        return DateTimeOffset.TryParse(text, CultureInfo.InvariantCulture, DateTimeStyles.AssumeUniversal | DateTimeStyles.AdjustToUniversal, out var utc)
            ? utc
            : throw new BadInputException($"{option} '{text}' is no date; expected UTC such as 2026-04-02 or 2026-04-02T18:30Z.");
    }
}
