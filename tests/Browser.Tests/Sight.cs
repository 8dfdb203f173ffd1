using System.Text.RegularExpressions;

namespace Lampwarden.Browser.Tests;

/// <summary>
/// One page in one browser window. Whatever a test is about, the page must raise no script error, ask no other host for
/// anything, break no rule of its content security policy, and never be wider than its screen.
/// </summary>
internal sealed class Sight : IAsyncDisposable
{
    private readonly IBrowserContext _context;
    private readonly Screen _screen;
    private readonly List<string> _complaints = [];

    private Sight(IBrowserContext context, IPage page, Screen screen) => (_context, Page, _screen) = (context, page, screen);

    public IPage Page { get; }

    /// <summary>Complaints that a test expects, such as those of a host that is switched off.</summary>
    public Regex Allowed { get; set; } = new("^$");

    public static async Task<Sight> OpenAsync(IBrowserContext context, Uri url, Screen screen)
    {
        var page = await context.NewPageAsync();
        var sight = new Sight(context, page, screen);
        page.PageError += (_, error) => sight.Complain(error);
        page.Console += (_, message) =>
        {
            if (message.Type is "error" or "warning")
            {
                sight.Complain(message.Text);
            }
        };
        page.Request += (_, request) =>
        {
            if (new Uri(request.Url).Authority != url.Authority)
            {
                sight.Complain($"asked another host: {request.Url}");
            }
        };
        // Never the end of all network traffic: the event stream has none.
        await page.GotoAsync(url.ToString(), new PageGotoOptions { WaitUntil = WaitUntilState.DOMContentLoaded });
        return sight;
    }

    public Task GoAsync(string hash) => Page.EvaluateAsync("hash => { location.hash = hash; }", hash);

    /// <summary>Writes a picture to the folder of screenshots.</summary>
    public async Task PictureAsync(string name, bool whole = false)
    {
        Directory.CreateDirectory(BrowserFixture.Screenshots);
        await Page.ScreenshotAsync(new PageScreenshotOptions { Path = Path.Combine(BrowserFixture.Screenshots, $"{name}-{_screen.Name}.png"), FullPage = whole });
    }

    public async Task<string> TextAsync(string selector) => (await Page.Locator(selector).First.TextContentAsync() ?? "").Trim();

    public ILocatorAssertions Expect(string selector) => Assertions.Expect(Page.Locator(selector).First);

    public async ValueTask DisposeAsync()
    {
        var wide = await Page.EvaluateAsync<int>("document.documentElement.scrollWidth - document.documentElement.clientWidth");
        await _context.DisposeAsync();
        lock (_complaints)
        {
            Assert.DoesNotContain(_complaints, complaint => !Allowed.IsMatch(complaint));
        }

        Assert.True(wide <= 0, $"The page is {wide} px wider than the {_screen.Name}.");
    }

    private void Complain(string what)
    {
        lock (_complaints)
        {
            _complaints.Add(what);
        }
    }
}
