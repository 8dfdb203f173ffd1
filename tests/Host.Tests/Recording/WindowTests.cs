using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;
using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Host.Tests.Recording;

public sealed class WindowTests : IDisposable
{
    private readonly TempFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Theory]
    [InlineData(0, double.PositiveInfinity, 20, true)]
    [InlineData(0, double.PositiveInfinity, 20, false)]
    [InlineData(123.4, 456.7, 2000, true)]
    [InlineData(700, 1900, 7, true)]
    [InlineData(1500, 3000, 100, true)]
    public async Task Window_AnyWidth_AgreesWithTheReadings(double from, double to, int most, bool ended)
    {
        using var store = SoakStore.Open(_folder.Path, new FakeTimeProvider(), StoreMode.Recording, new StoreOptions { ChunkReadings = 500 });
        var run = await store.BeginRunAsync(SoakStoreTests.Start());
        var random = new Random(11);
        for (var i = 0; i < 4000; i++)
        {
            run.Append(new LineReading(i * 0.5, i == 1000 ? double.PositiveInfinity : 0.4 + (random.Next(1000) * 1e-5), 5, 118 + random.NextDouble(), 2));
        }

        run.AppendMissed(2600, "disconnected");
        run.Append(new LineReading(2600.5, 0.5, 5));
        _ = ended ? await run.EndAsync(new RunEnd(Verdict.Passed, [])) : await run.FlushAsync();

        var window = store.Window(run.Run, from, to, most);

        Assert.InRange(window.Buckets.Count, 1, most);
        var all = store.Readings(run.Run).ToList();
        foreach (var bucket in window.Buckets)
        {
            var inside = all.Where(reading => reading.Seconds >= bucket.FromSeconds && reading.Seconds < Math.Min(bucket.ToSeconds, window.ToSeconds)).ToList();
            var numbers = inside.Where(reading => double.IsFinite(reading.Amps)).Select(reading => reading.Amps).ToList();
            Assert.Equal(numbers.Count, bucket.Count);
            Assert.Equal(inside.Count(reading => reading.IsOverload), bucket.Overloads);
            Assert.Equal(inside.Count(reading => reading.IsMissing), bucket.Missing);
            Assert.Equal(numbers.Count == 0 ? double.NaN : numbers.Min(), bucket.MinAmps);
            Assert.Equal(numbers.Count == 0 ? double.NaN : numbers.Max(), bucket.MaxAmps);
            Assert.Equal(numbers.Count == 0 ? double.NaN : numbers.Average(), bucket.MeanAmps, 1e-8);
        }

        Assert.Equal(to > 2000, window.Gaps.Count == 1);
    }
}
