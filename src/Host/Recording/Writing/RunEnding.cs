using System.Text.Json;
using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Recording.Writing;

/// <summary>Puts totals and verdict into a run's row.</summary>
internal static class RunEnding
{
    public static void Write(StoreBatch batch, long run, RunEnd end)
    {
        var last = batch.Ask("SELECT max(to_ms) FROM chunks WHERE run=?", run) as long? ?? 0;
        var length = end.EndSeconds is { } seconds ? Math.Max(last, StoreBatch.Milliseconds(seconds)) : last;
        batch.Run(
            """
            UPDATE runs SET verdict=?, reasons=?, summary=?, length_ms=?, ended_ms=started_ms+?,
                readings=(SELECT coalesce(sum(readings),0) FROM chunks WHERE chunks.run=runs.run) WHERE run=?
            """,
            end.Verdict.Text(), JsonSerializer.Serialize(end.Reasons), end.SummaryJson, length, length, run);
        batch.Run("DELETE FROM watch_states WHERE run=?", run);
    }
}
