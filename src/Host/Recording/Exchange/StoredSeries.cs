using System.Text.Json;
using System.Text.RegularExpressions;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Recording.Exchange;

/// <summary>A stored run as the watch saw it.</summary>
public static partial class StoredSeries
{
    /// <summary>Whether a text has the shape of a run's id.</summary>
    public static bool IsRunId(string text) => Id().IsMatch(text);

    /// <summary>The run's stream as observations, the very numbers the live watch was given.</summary>
    /// <exception cref="StoreException">There is no such run, or its readings are damaged.</exception>
    public static IReadOnlyList<Observation> Read(SoakStore store, string run) =>
        [.. store.Readings(run).Select(reading => new Observation(reading.Seconds, reading.Amps, reading.MainsVolts))];

    /// <summary>The bench a run was recorded on; null where its configuration is not one that this version reads.</summary>
    public static BenchOptions? BenchOf(RunRecord record)
    {
        try
        {
            var bench = JsonSerializer.Deserialize<BenchOptions>(record.ConfigurationJson, Json.Compact);
            return bench is { Meters.Count: > 0 } ? bench : null;
        }
        catch (JsonException)
        {
            return null;
        }
    }

    [GeneratedRegex("^[0-9]{8}-[0-9]{3,}$")]
    private static partial Regex Id();
}
