using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Tests.Recording;

/// <summary>
/// A file of every schema there has been, as the program of its time wrote it: one finished run of 980 readings and 20
/// missed polls with everything that can hang on a run, and one that was interrupted after 300 readings.
/// </summary>
public sealed class MigrationTests
{
    public static TheoryData<int> EarlierVersions => [.. Enumerable.Range(1, StoreSchema.Version - 1)];

    [Theory]
    [MemberData(nameof(EarlierVersions))]
    public async Task Open_FileOfAnEarlierVersion_IsBroughtForwardWhole(int version)
    {
        using var folder = new TempFolder();
        File.Copy(Path.Combine(AppContext.BaseDirectory, "Recording", "Fixtures", $"soaks-v{version}.db"), Path.Combine(folder.Path, SoakStore.FileName));
        using var store = SoakStore.Open(folder.Path, TimeProvider.System);

        Assert.Equal("20260402-002", Assert.Single(store.Interrupted).Run);
        Assert.Equal(300, store.Run("20260402-002").Info.Readings);
        var record = store.Run("20260402-001");
        Assert.Equal((Verdict.Passed, 980L, "job 1207"), (record.Info.Verdict, record.Info.Readings, record.Info.UnitLabel));
        Assert.Equal("""{"contrast":2.1}""", record.PredictionJson);
        Assert.Equal(new StoredGap(249.5, 260, "no-answer", "nothing in 1 s", 20), Assert.Single(record.Gaps));
        Assert.Equal((Signature.MeterSilent, 260.0), (record.Findings[0].Signature, record.Findings[0].ClearedSeconds));
        Assert.Equal(("Ada", 100.0), (record.Notes[0].Author, record.Notes[0].AtSeconds));
        Assert.Equal("a picture it is not"u8, store.Attachment("20260402-001", "bench.txt"));
        var stream = store.Readings("20260402-001").ToList();
        Assert.Equal(1000, stream.Count);
        for (var i = 0; i < 1000; i++)
        {
            Assert.Equal(i is >= 500 and < 520 ? new LineReading(i * 0.5, double.NaN) : new LineReading(i * 0.5, 0.4 + (i * 37 % 101 * 0.0001), 4, 119 + (i % 7 * 0.1), 1), stream[i]);
        }

        // What the later steps added works in such a file too.
        var run = await store.BeginRunAsync(SoakStoreTests.Start());
        Assert.True(await run.EndAsync(new RunEnd(Verdict.Passed, [])));
    }

    [Fact]
    public void Open_FileOfALaterVersion_IsLeftAlone()
    {
        using var folder = new TempFolder();
        SoakStore.Open(folder.Path, TimeProvider.System).Dispose();
        var path = Path.Combine(folder.Path, SoakStore.FileName);
        using (var connection = new StoreFile(path).Connect(Microsoft.Data.Sqlite.SqliteOpenMode.ReadWrite))
        {
            StoreSchema.Execute(connection, $"PRAGMA user_version={StoreSchema.Version + 1}");
        }

        var refused = Assert.Throws<StoreException>(() => SoakStore.Open(folder.Path, TimeProvider.System));
        Assert.Contains($"has schema version {StoreSchema.Version + 1}", refused.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Open_SqliteFileOfAnotherProgram_IsLeftAlone()
    {
        using var folder = new TempFolder();
        using (var connection = new StoreFile(Path.Combine(folder.Path, SoakStore.FileName)).Connect(Microsoft.Data.Sqlite.SqliteOpenMode.ReadWriteCreate))
        {
            StoreSchema.Execute(connection, "CREATE TABLE recipes (name TEXT)");
        }

        var refused = Assert.Throws<StoreException>(() => SoakStore.Open(folder.Path, TimeProvider.System));
        Assert.Contains("another program", refused.Message, StringComparison.Ordinal);
    }
}
