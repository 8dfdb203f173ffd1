using System.Globalization;
using System.Text;
using System.Text.Json;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Commands.Calibrating;

/// <summary>
/// Puts a lamp's calibration into the configuration file without touching anything else in it: comments and layout stay. Written beside
/// the file, read back and checked, then exchanged for it in one step; the old file stays as a backup.
/// </summary>
internal static class InventoryFile
{
    private static readonly JsonReaderOptions Reading = new() { CommentHandling = JsonCommentHandling.Skip, AllowTrailingCommas = true };

    /// <summary>Writes the calibration.</summary>
    /// <param name="path">The configuration.</param>
    /// <param name="lamp">A lamp of its inventory.</param>
    /// <param name="measured">What was measured.</param>
    /// <param name="now">Names the backup.</param>
    /// <returns>The backup's path.</returns>
    /// <exception cref="ConfigurationException">The result would not be in order; the file is as it was.</exception>
    /// <exception cref="IOException">The folder cannot be written; the file is as it was.</exception>
    public static string Write(string path, string lamp, LampCalibrationOptions measured, DateTimeOffset now)
    {
        var old = File.ReadAllBytes(path);
        var fresh = path + ".new";
        var backup = string.Create(CultureInfo.InvariantCulture, $"{path}.{now.UtcDateTime:yyyyMMdd-HHmmss}.bak");
        try
        {
            Save(fresh, Edit(old, lamp, Text(measured)));
            ConfigurationFile.Load(fresh);
            Save(backup, old);
            if (!OperatingSystem.IsWindows())
            {
                File.SetUnixFileMode(fresh, File.GetUnixFileMode(path));
            }

            File.Move(fresh, path, overwrite: true);
            return backup;
        }
        finally
        {
            File.Delete(fresh);
        }
    }

    /// <summary>The file's bytes with the lamp's calibration put in, or put in place of the one before.</summary>
    /// <exception cref="BadInputException">There is no such lamp in the file itself.</exception>
    internal static byte[] Edit(byte[] json, string lamp, string calibration)
    {
        var mark = json.AsSpan().StartsWith(Encoding.UTF8.Preamble) ? Encoding.UTF8.Preamble.Length : 0;
        var reader = new Utf8JsonReader(json.AsSpan(mark), Reading);
        var inLamps = false;
        while (reader.Read())
        {
            if (reader.CurrentDepth == 1 && reader.TokenType == JsonTokenType.PropertyName)
            {
                inLamps = Is(ref reader, "lamps");
            }
            else if (inLamps && reader.CurrentDepth == 2 && reader.TokenType == JsonTokenType.StartObject && Find(ref reader, lamp) is { } place)
            {
                var text = Encoding.UTF8.GetBytes((place.Bare ? ", \"calibration\": " : "") + calibration);
                return [.. json.AsSpan(0, mark + place.From), .. text, .. json.AsSpan(mark + place.To)];
            }
        }

        throw new BadInputException($"Lamp '{lamp}' does not stand in the file itself; add it to lamps first, with name, ratedWatts and ratedVolts.");
    }

    // Reads one lamp to its end: where its calibration stands, or where one can be put, behind its last value; null for another lamp.
    private static (int From, int To, bool Bare)? Find(ref Utf8JsonReader reader, string lamp)
    {
        var (mine, from, to, end) = (false, -1, -1, -1);
        while (reader.Read() && !(reader.TokenType == JsonTokenType.EndObject && reader.CurrentDepth == 2))
        {
            var isName = Is(ref reader, "name");
            var isCalibration = Is(ref reader, "calibration");
            reader.Read();
            mine |= isName && string.Equals(reader.GetString(), lamp, StringComparison.OrdinalIgnoreCase);
            var begin = (int)reader.TokenStartIndex;
            reader.Skip();
            end = (int)reader.BytesConsumed;
            (from, to) = isCalibration ? (begin, end) : (from, to);
        }

        return !mine ? null : from >= 0 ? (from, to, false) : (end, end, true);
    }

    private static bool Is(ref Utf8JsonReader reader, string name) =>
        reader.TokenType == JsonTokenType.PropertyName && string.Equals(reader.GetString(), name, StringComparison.OrdinalIgnoreCase);

    private static string Text(LampCalibrationOptions measured)
    {
        var parts = new List<string>();
        Add("coldOhms", measured.ColdOhms);
        Add("roomCelsius", measured.ColdOhms is null ? null : measured.RoomCelsius);
        Add("shortedAmps", measured.ShortedAmps);
        Add("shortedVolts", measured.ShortedVolts);
        Add("dimAmps", measured.DimAmps);
        Add("dimVolts", measured.DimVolts);
        return $"{{ {string.Join(", ", parts)} }}";

        void Add(string name, double? value)
        {
            if (value is { } number)
            {
                parts.Add(string.Create(CultureInfo.InvariantCulture, $"\"{name}\": {Math.Round(number, 9)}"));
            }
        }
    }

    private static void Save(string path, byte[] bytes)
    {
        using var file = new FileStream(path, FileMode.Create, FileAccess.Write, FileShare.None);
        file.Write(bytes);
        file.Flush(flushToDisk: true);
    }
}
