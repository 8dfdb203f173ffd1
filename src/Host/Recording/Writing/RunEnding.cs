using System.Text.Json;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording.Packing;

namespace Lampwarden.Host.Recording.Writing;

/// <summary>Puts totals and verdict into a run's row.</summary>
internal static class RunEnding
{
    private const int ChunksTogether = 32;

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
        GatherSlots(batch, run);
    }

    // While the run went on, its roll-ups were written one by one between its chunks. Side by side they are read in one go.
    private static void GatherSlots(StoreBatch batch, long run)
    {
        var rows = batch.Rows(
            "SELECT first, count, from_ms, to_ms, slots FROM rollups WHERE run=? ORDER BY first",
            row => (First: row.GetInt64(0), Count: row.GetInt64(1), From: row.GetInt64(2), To: row.GetInt64(3), Slots: row.GetFieldValue<byte[]>(4)),
            run);
        if (rows.Count < 2)
        {
            return;
        }

        byte[][] gathered;
        try
        {
            gathered = [.. rows.Chunk(ChunksTogether).Select(some => SlotChunk.Pack([.. some.SelectMany(row => SlotChunk.Unpack(row.Slots))]))];
        }
        catch (InvalidDataException)
        {
            // A damaged one stays where it is and says so when it is asked for; the run is closed all the same.
            return;
        }

        batch.Run("DELETE FROM rollups WHERE run=?", run);
        foreach (var (some, slots) in rows.Chunk(ChunksTogether).Zip(gathered))
        {
            batch.Run(
                "INSERT INTO rollups (run, first, count, from_ms, to_ms, slots) VALUES (?,?,?,?,?,?)",
                run, some[0].First, some.Sum(row => row.Count), some.Min(row => row.From), some.Max(row => row.To), slots);
        }
    }
}
