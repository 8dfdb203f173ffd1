using System.Net;
using System.Net.Http.Json;
using System.Text.Json;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Web;
using Lampwarden.Host.Web.Access;
using Lampwarden.Simulator;

namespace Lampwarden.Host.Tests.Web.Support;

/// <summary>The whole service with its page, over one bench that a test plays.</summary>
internal sealed class LivePage : IAsyncDisposable
{
    private readonly DirectoryInfo _folder = Directory.CreateTempSubdirectory("lampwarden-live-");
    private readonly CancellationTokenSource _stop = new();
    private readonly RehearsalClock _clock;
    private readonly StringWriter _prose = new();
    private Task<IReadOnlyList<SoakDocument>> _running = null!;

    private LivePage(double speed)
    {
        _clock = new RehearsalClock(speed);
        Bench = new PlayedBench(_clock);
    }

    public PlayedBench Bench { get; }

    public BenchPlan Plan { get; private set; } = null!;

    public Uri Url { get; private set; } = null!;

    /// <summary>Speaks to it.</summary>
    public HttpClient Client { get; private set; } = null!;

    /// <summary>Opens it; the bench is idle until a soak is started from the page.</summary>
    /// <param name="speed">How many times faster than life its clock runs.</param>
    public static async Task<LivePage> OpenAsync(double speed = 10)
    {
        var page = new LivePage(speed);
        var options = QuietPage.Bench("attic");
        options.Meters[0].Transport.Port = page.Bench.Port;
        options.Meters[0].ReadingsPerSecond = 2;
        options.Meters[0].Accuracy.CountSize = 0.0001;
        options.Soak.StartFrom = "page";
        page.Plan = BenchPlan.From(options, LampInventory.Empty);
        var address = PageAddress.Of(new WebOptions { Address = "http://127.0.0.1:0" }, "test");
        var order = new PageOrder(address, LampInventory.Empty, StaysOpen: true, MayFail: false, page._prose);
        page._running = SoakHost.RunAsync([page.Plan], page._folder.FullName, page._clock, [], logToConsole: false, page._clock.Begin, order, attended: null, page._stop.Token);
        while (!page._prose.ToString().Contains("The page:", StringComparison.Ordinal))
        {
            if (page._running.IsCompleted)
            {
                await page._running;
            }

            await Task.Delay(20);
        }

        page.Url = new Uri(page._prose.ToString().Split("The page: ")[1].Trim());
        page.Client = new HttpClient { BaseAddress = page.Url };
        return page;
    }

    /// <summary>The bench, once it is as wanted.</summary>
    public async Task<JsonElement> UntilAsync(Func<JsonElement, bool> good)
    {
        JsonElement bench = default;
        for (var attempt = 0; attempt < 600; attempt++)
        {
            bench = await Client.GetFromJsonAsync<JsonElement>(new Uri("/api/benches/attic", UriKind.Relative), TestContext.Current.CancellationToken);
            if (good(bench))
            {
                return bench;
            }

            await Task.Delay(50, TestContext.Current.CancellationToken);
        }

        throw new TimeoutException($"The bench never came to it: {bench}");
    }

    /// <summary>Asks for something to be done on the bench.</summary>
    public async Task<HttpStatusCode> PostAsync(string rest, object body)
    {
        using var answer = await Client.PostAsJsonAsync(new Uri($"/api/benches/attic/{rest}", UriKind.Relative), body, TestContext.Current.CancellationToken);
        return answer.StatusCode;
    }

    /// <summary>A run as it is on record.</summary>
    public Task<JsonElement> RunAsync(string? run) =>
        Client.GetFromJsonAsync<JsonElement>(new Uri($"/api/runs/{run}", UriKind.Relative), TestContext.Current.CancellationToken);

    public async ValueTask DisposeAsync()
    {
        Client.Dispose();
        await _stop.CancelAsync();
        await _running;
        await Bench.DisposeAsync();
        _clock.Dispose();
        _stop.Dispose();
        await _prose.DisposeAsync();
        _folder.Delete(recursive: true);
    }
}
