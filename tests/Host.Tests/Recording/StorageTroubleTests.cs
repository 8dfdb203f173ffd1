using System.Diagnostics;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Tests.Recording;

public sealed class StorageTroubleTests
{
    private static readonly StoreOptions Quick = new() { CommitEvery = TimeSpan.FromMilliseconds(20), QueueCapacity = 6_000, QueueReserve = 1_000 };

    [Fact]
    public async Task Append_OnAFullDisk_GoesOnAndCountsWhatIsLost()
    {
        using var disk = SmallDisk.Mount("2m");
        var folder = Path.Combine(disk.Path, "soaks");
        using (var store = SoakStore.Open(folder, TimeProvider.System, StoreMode.Recording, Quick))
        {
            var run = await store.BeginRunAsync(SoakStoreTests.Start());
            run.Append(new LineReading(0, 0.5, 1));
            Assert.True(await run.FlushAsync());
            var ballast = disk.Fill();

            var refused = 0;
            var slowest = TimeSpan.Zero;
            for (var i = 1; i <= 20_000; i++)
            {
                // Random digits, so that nothing packs into the last free bytes.
                var began = Stopwatch.GetTimestamp();
                refused += run.Append(new LineReading(i * 0.1, Random.Shared.NextDouble())) ? 0 : 1;
                slowest = TimeSpan.FromTicks(Math.Max(slowest.Ticks, Stopwatch.GetElapsedTime(began).Ticks));
            }

            Assert.True(run.AppendAlert(new StoredAlertChange(2000, TimeProvider.System.GetUtcNow(), "1", "raised", "unacknowledged")), "alerts keep their places in the queue");
            Assert.False(await run.FlushAsync(), "nothing may be told as stored that is not");
            Assert.Contains("disk is full", store.Health.Trouble, StringComparison.Ordinal);
            Assert.InRange(refused, 14_000, 20_000);
            Assert.Equal(refused, run.Lost);
            Assert.InRange(slowest.TotalSeconds, 0, 1);

            File.Delete(ballast);
            Assert.True(await run.EndAsync(new RunEnd(Verdict.Incomplete, ["the disk was full"])));
            Assert.Null(store.Health.Trouble);
            var record = store.Run(run.Run);
            Assert.Equal(20_001 - refused, record.Info.Readings);
            Assert.Equal(refused, record.Info.Lost);
            Assert.Equal(refused, Assert.Single(record.Gaps, gap => gap.Reason == "not-stored").Polls);
            Assert.Single(record.AlertChanges);
        }

        using var again = SoakStore.Open(folder, TimeProvider.System);
        Assert.Empty(again.Interrupted);
    }

    [Fact]
    public async Task Open_ReadOnlyMedium_RefusesToRecordButStillShowsTheRuns()
    {
        using var disk = SmallDisk.Mount("4m");
        using (var store = SoakStore.Open(disk.Path, TimeProvider.System))
        {
            var run = await store.BeginRunAsync(SoakStoreTests.Start());
            run.Append(new LineReading(1, 0.5, 1));
            await run.EndAsync(new RunEnd(Verdict.Passed, []));
        }

        disk.MakeReadOnly();
        var refused = Assert.Throws<StoreException>(() => SoakStore.Open(disk.Path, TimeProvider.System));
        Assert.Contains("cannot be written", refused.Message, StringComparison.Ordinal);
        Assert.Contains("--record", refused.Message, StringComparison.Ordinal);
        using var review = SoakStore.Open(disk.Path, TimeProvider.System, StoreMode.Review);
        var only = Assert.Single(review.Runs());
        Assert.Equal(0.5, Assert.Single(review.Readings(only.Run)).Amps);
        await Assert.ThrowsAsync<StoreException>(() => review.AddNoteAsync(only.Run, "a note"));
    }

    [Fact]
    public async Task Readings_OfADamagedPage_AreRefusedAndTheOtherRunIsRead()
    {
        using var folder = new TempFolder();
        var path = Path.Combine(folder.Path, SoakStore.FileName);
        string[] runs;
        using (var store = SoakStore.Open(folder.Path, TimeProvider.System))
        {
            runs = [await RecordAsync(store, 0.4), await RecordAsync(store, 0.7)];
        }

        var bytes = await File.ReadAllBytesAsync(path);
        Random.Shared.NextBytes(bytes.AsSpan(PlaceWithinFirstChunk(path, bytes), 32));
        await File.WriteAllBytesAsync(path, bytes);

        using var review = SoakStore.Open(folder.Path, TimeProvider.System, StoreMode.Review);
        var refused = Assert.Throws<StoreException>(() => review.Readings(runs[0]).Count());
        Assert.Contains($"Readings of run {runs[0]}", refused.Message, StringComparison.Ordinal);
        Assert.Equal(10_000, review.Readings(runs[1]).Count());
        Assert.Equal(2, review.Runs().Count);
    }

    [Fact]
    public async Task Open_DamagedTable_RefusesToRecordAndStillReadsTheRuns()
    {
        using var folder = new TempFolder();
        var path = Path.Combine(folder.Path, SoakStore.FileName);
        string run;
        using (var store = SoakStore.Open(folder.Path, TimeProvider.System))
        {
            run = await RecordAsync(store, 0.4);
        }

        int page;
        using (var connection = new StoreFile(path).Connect(Microsoft.Data.Sqlite.SqliteOpenMode.ReadOnly))
        {
            page = (int)StoreSchema.Scalar(connection, "SELECT rootpage FROM sqlite_master WHERE name='parked_points'");
        }

        var bytes = await File.ReadAllBytesAsync(path);
        Random.Shared.NextBytes(bytes.AsSpan((page - 1) * 4096, 4096));
        bytes[(page - 1) * 4096] = 77; // no kind of page has this number
        await File.WriteAllBytesAsync(path, bytes);

        var refused = Assert.Throws<StoreException>(() => SoakStore.Open(folder.Path, TimeProvider.System));
        Assert.Contains("damaged", refused.Message, StringComparison.Ordinal);
        Assert.Contains("export", refused.Message, StringComparison.Ordinal);
        using var review = SoakStore.Open(folder.Path, TimeProvider.System, StoreMode.Review);
        Assert.Equal(run, Assert.Single(review.Runs()).Run);
        Assert.Equal(10_000, review.Readings(run).Count());
    }

    [Fact]
    public void Open_FileThatIsNoDatabase_SaysWhatToDo()
    {
        using var folder = new TempFolder();
        File.WriteAllText(Path.Combine(folder.Path, SoakStore.FileName), new string('x', 5000));
        var refused = Assert.Throws<StoreException>(() => SoakStore.Open(folder.Path, TimeProvider.System));
        Assert.Contains("not a store of this program", refused.Message, StringComparison.Ordinal);
    }

    private static async Task<string> RecordAsync(SoakStore store, double amps)
    {
        var run = await store.BeginRunAsync(SoakStoreTests.Start());
        var random = new Random((int)(amps * 10));
        for (var i = 0; i < 10_000; i++)
        {
            run.Append(new LineReading(i * 0.1, Math.Round(amps + (random.NextDouble() * 0.001), 6), 6));
        }

        Assert.True(await run.EndAsync(new RunEnd(Verdict.Passed, [])));
        return run.Run;
    }

    // Somewhere in the middle of the first run's packed readings: pieces of 32 bytes that no page boundary cuts stand in the file as they are.
    private static int PlaceWithinFirstChunk(string path, byte[] file)
    {
        using var connection = new StoreFile(path).Connect(Microsoft.Data.Sqlite.SqliteOpenMode.ReadOnly);
        using var command = connection.CreateCommand();
        command.CommandText = "SELECT data FROM chunks ORDER BY run LIMIT 1";
        var chunk = (byte[])command.ExecuteScalar()!;
        return Enumerable.Range(0, 100).Select(piece => file.AsSpan().IndexOf(chunk.AsSpan((chunk.Length / 2) + (piece * 32), 32))).First(at => at > 0);
    }
}
