[assembly: AssemblyFixture(typeof(Lampwarden.Browser.Tests.BrowserFixture))]
[assembly: Xunit.v3.Parallelization(Mode = Xunit.Sdk.ParallelMode.None)]

namespace Lampwarden.Browser.Tests;

/// <summary>The system's Chromium, started once for all tests; where there is none, they skip with that reason.</summary>
public sealed class BrowserFixture : IAsyncDisposable
{
    private static readonly string[] Names = ["chromium", "chromium-browser", "google-chrome"];

    private IPlaywright? _playwright;
    private IBrowser? _browser;

    /// <summary>Where screenshots go: artifacts/screenshots of the repository, or what LAMPWARDEN_SCREENSHOTS names.</summary>
    public static string Screenshots { get; } =
        Environment.GetEnvironmentVariable("LAMPWARDEN_SCREENSHOTS") ?? Path.Combine(Host.Tests.Web.Repository.Root(), "artifacts", "screenshots");

    internal async Task<Sight> LookAsync(Uri url, Screen screen)
    {
        _browser ??= await StartAsync();
        var context = await _browser.NewContextAsync(new BrowserNewContextOptions
        {
            ViewportSize = new ViewportSize { Width = screen.Width, Height = screen.Height },
            HasTouch = screen.Width < 500,
            ReducedMotion = ReducedMotion.Reduce,
            Locale = "en-GB",
        });
        context.SetDefaultTimeout(20_000);
        return await Sight.OpenAsync(context, url, screen);
    }

    public async ValueTask DisposeAsync()
    {
        if (_browser is not null)
        {
            await _browser.DisposeAsync();
        }

        _playwright?.Dispose();
    }

    private async Task<IBrowser> StartAsync()
    {
        var folders = (Environment.GetEnvironmentVariable("PATH") ?? "").Split(Path.PathSeparator);
        var path = Names.SelectMany(name => folders.Select(folder => Path.Combine(folder, name))).FirstOrDefault(File.Exists);
        Outside.Need(path is not null, "no Chromium is installed (Debian: apt-get install chromium)");
        // Long enough for a busy machine: a test that passes never waits so long.
        Assertions.SetDefaultExpectTimeout(20_000);
        _playwright = await Playwright.CreateAsync();
        return await _playwright.Chromium.LaunchAsync(new BrowserTypeLaunchOptions { ExecutablePath = path, ChromiumSandbox = false });
    }
}
