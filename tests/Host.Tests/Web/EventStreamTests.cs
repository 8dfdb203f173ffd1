using System.Diagnostics;
using System.Net.ServerSentEvents;
using System.Text.Json;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Tests.Web.Support;
using Lampwarden.Host.Web.Live;

namespace Lampwarden.Host.Tests.Web;

/// <summary>The event stream: begins with everything, resumes without a hole, ends with the service.</summary>
public sealed class EventStreamTests
{
    private static CancellationToken Cancellation => TestContext.Current.CancellationToken;

    [Fact]
    public async Task Stream_New_BeginsWithEverything()
    {
        await using var page = await QuietPage.OpenAsync();
        await using var stream = await Reader.OpenAsync(page);

        var first = await stream.NextAsync();

        Assert.Equal("reset", first.EventType);
        Assert.Equal("attic", first.Data.GetProperty("benches")[0].GetProperty("bench").GetString());
        Assert.NotNull(stream.LastId);
    }

    [Fact]
    public async Task Stream_Resumed_MissesNothingAndRepeatsNothing()
    {
        await using var page = await QuietPage.OpenAsync();
        Begin(page);
        await using var first = await Reader.OpenAsync(page);
        await first.NextAsync();
        Observe(page, 0, 10);
        var seen = await first.SecondsUntilAsync(9);
        var id = first.LastId;
        await first.DisposeAsync();

        // All this happens while nobody listens.
        Observe(page, 10, 30);
        page.Board.Collect();
        Observe(page, 30, 50);
        page.Board.Collect();

        await using var second = await Reader.OpenAsync(page, id);
        var later = await second.SecondsUntilAsync(49);

        Assert.DoesNotContain("reset", second.Types);
        Assert.Equal(Enumerable.Range(0, 50).Select(second => (double)second), seen.Concat(later));
    }

    [Fact]
    public async Task Stream_ResumedFromAnEventNoLongerKept_BeginsAnew_AndTheTraceHasTheRest()
    {
        await using var page = await QuietPage.OpenAsync();
        Begin(page);
        await using var first = await Reader.OpenAsync(page);
        await first.NextAsync();
        var id = first.LastId;
        for (var second = 0; second < 5000; second++)
        {
            Observe(page, second, second + 1);
            page.Board.Collect();
        }

        await using var resumed = await Reader.OpenAsync(page, id);

        Assert.Equal("reset", (await resumed.NextAsync()).EventType);
        Assert.Equal(4999, page.Board.Trace("attic")!.LastSeconds);
    }

    [Fact]
    public async Task Stream_ResumedFromAnotherProcess_BeginsAnew()
    {
        await using var page = await QuietPage.OpenAsync();
        await using var stream = await Reader.OpenAsync(page, "deadbeef-3");

        Assert.Equal("reset", (await stream.NextAsync()).EventType);
    }

    [Fact]
    public async Task Stream_OfAnotherBench_CarriesNoReadings()
    {
        await using var page = await QuietPage.OpenAsync(null, null, "attic", "cellar");
        Begin(page);
        await using var stream = await Reader.OpenAsync(page, bench: "cellar");
        await stream.NextAsync();
        Observe(page, 0, 5);
        page.Board.Collect();
        page.Board.Hear(new DeskChanged("cellar", Idle: true, CanStart: true, CanEnd: false));
        page.Board.Collect();

        while ((await stream.NextAsync(type => type is "bench" or "readings")).Data.GetProperty("bench").GetString() != "cellar")
        {
        }

        Assert.DoesNotContain("readings", stream.Types);
    }

    [Fact]
    public async Task Service_Ending_TellsTheEndOfTheRun_AndIsNotHeldUpByAnOpenStream()
    {
        await using var page = await QuietPage.OpenAsync();
        Begin(page);
        await using var stream = await Reader.OpenAsync(page);
        await stream.NextAsync();
        page.Board.Hear(new RunEnded("attic", 9, new SoakDocument(9, [], [], Verdict.Passed, new Dictionary<string, object>()), new Judgement(Verdict.Passed, ["It kept to its band."], new Dictionary<string, double>())));
        var watch = Stopwatch.StartNew();

        await page.StopAsync();

        // The framework would wait thirty seconds for a stream that nobody ends, ours five; neither is needed.
        Assert.InRange(watch.Elapsed.TotalSeconds, 0, 4.5);
        Assert.Equal("passed", (await stream.NextAsync(type => type == "bench")).Data.GetProperty("verdict").GetString());
    }

    private static void Begin(QuietPage page)
    {
        page.Board.Hear(new RunBegan("attic", "20260402-001", page.Plans[0], DateTimeOffset.UnixEpoch));
        page.Board.Collect();
    }

    private static void Observe(QuietPage page, int from, int to)
    {
        for (var second = from; second < to; second++)
        {
            page.Board.Hear(new Observed("attic", new Observation(second, 0.3), WatchPhase.Watching, () => "All is well."));
        }
    }

    /// <summary>Reads one stream as a browser would.</summary>
    private sealed class Reader : IAsyncDisposable
    {
        private readonly HttpResponseMessage _answer;
        private readonly IAsyncEnumerator<SseItem<string>> _items;

        private Reader(HttpResponseMessage answer, Stream body)
        {
            _answer = answer;
            Parser = SseParser.Create(body);
            _items = Parser.EnumerateAsync(Cancellation).GetAsyncEnumerator(Cancellation);
        }

        public SseParser<string> Parser { get; }

        public string? LastId => Parser.LastEventId;

        public List<string> Types { get; } = [];

        public static async Task<Reader> OpenAsync(QuietPage page, string? lastId = null, string bench = "attic")
        {
            using var request = new HttpRequestMessage(HttpMethod.Get, $"/api/events?bench={bench}");
            if (lastId is not null)
            {
                request.Headers.Add("Last-Event-ID", lastId);
            }

            var answer = await page.Client.SendAsync(request, HttpCompletionOption.ResponseHeadersRead, Cancellation);
            Assert.Equal("text/event-stream", answer.Content.Headers.ContentType?.MediaType);
            return new Reader(answer, await answer.Content.ReadAsStreamAsync(Cancellation));
        }

        public async Task<SseItem<JsonElement>> NextAsync(Func<string, bool>? wanted = null)
        {
            while (await _items.MoveNextAsync().AsTask().WaitAsync(TimeSpan.FromSeconds(20), Cancellation))
            {
                var item = _items.Current;
                Types.Add(item.EventType);
                if (wanted?.Invoke(item.EventType) ?? item.EventType != "heartbeat")
                {
                    return new SseItem<JsonElement>(JsonSerializer.Deserialize<JsonElement>(item.Data), item.EventType);
                }
            }

            throw new InvalidOperationException($"The stream ended after {string.Join(", ", Types)}.");
        }

        public async Task<List<double>> SecondsUntilAsync(double last)
        {
            var seconds = new List<double>();
            while (seconds.Count == 0 || seconds[^1] < last)
            {
                seconds.AddRange((await NextAsync(type => type == "readings")).Data.GetProperty("seconds").EnumerateArray().Select(item => item.GetDouble()));
            }

            return seconds;
        }

        public async ValueTask DisposeAsync()
        {
            await _items.DisposeAsync();
            _answer.Dispose();
        }
    }
}
