using System.Globalization;

namespace Lampwarden.Host.Recording.Writing;

/// <summary>A new run's row and id.</summary>
internal static class RunBeginning
{
    public static void Write(StoreBatch batch, ActiveRun run, RunStart start, DateTimeOffset started, string? origin)
    {
        var id = origin is not null && batch.Ask("SELECT run FROM runs WHERE id=?", origin) is null ? origin : NextId(batch, started);
        batch.Run(
            """
            INSERT INTO runs (id, bench, unit, unit_label, bank, mains, planned_hours, configuration, prediction, software, started_ms, resumed_from, origin)
            VALUES (?,?,?,?,?,?,?,?,?,?,?,?,?)
            """,
            id, start.Bench, start.Unit, start.UnitLabel, start.Bank, start.Mains, start.PlannedHours, start.ConfigurationJson,
            start.PredictionJson, start.Software, started.ToUnixTimeMilliseconds(), start.ResumedFrom, origin);
        (run.Key, run.Id) = ((long)batch.Ask("SELECT last_insert_rowid()")!, id);
    }

    private static string NextId(StoreBatch batch, DateTimeOffset started)
    {
        var last = batch.Ask("SELECT max(id) FROM runs WHERE id LIKE ?", RunRows.Id(started, 0)[..9] + "%") as string;
        var number = last is null ? 0 : int.Parse(last.AsSpan(9), CultureInfo.InvariantCulture);
        return RunRows.Id(started, number + 1);
    }
}
