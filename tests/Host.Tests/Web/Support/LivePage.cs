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
        return page;
    }

    public async ValueTask DisposeAsync()
    {
        await _stop.CancelAsync();
        await _running;
        await Bench.DisposeAsync();
        _clock.Dispose();
        _stop.Dispose();
        await _prose.DisposeAsync();
        _folder.Delete(recursive: true);
    }
}
