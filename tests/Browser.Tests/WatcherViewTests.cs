using Lampwarden.Host.Tests.Web.Support;

namespace Lampwarden.Browser.Tests;

/// <summary>Whom the watcher can tell, and what it can cut off.</summary>
public sealed class WatcherViewTests(BrowserFixture browser)
{
    [Theory]
    [InlineData("laptop")]
    [InlineData("phone")]
    public async Task Watcher_TriesARouteFromThePage(string screen)
    {
        Outside.Need(File.Exists("/bin/true"), "there is no /bin/true");
        await using var page = await QuietPage.OpenAsync(QuietPage.TwoRoutes());
        await using var sight = await browser.LookAsync(page.Url, Screen.Of(screen));
        await sight.GoAsync("#/watcher");
        await sight.Expect("h1").ToHaveTextAsync("Watcher");
        await Assertions.Expect(sight.Page.Locator("section")).ToHaveCountAsync(5);

        await TryAsync("Route works", "Taken after");
        await TryAsync("Route breaks", "Not taken: /bin/false ended with 1");
        await Assertions.Expect(Card("Cut-off of attic")).ToContainTextAsync("no protective device");
        await sight.PictureAsync("watcher", whole: true);

        ILocator Card(string title) => sight.Page.Locator("section", new PageLocatorOptions { HasText = title });

        async Task TryAsync(string title, string answer)
        {
            await Card(title).GetByText("Send a test").ClickAsync();
            await Assertions.Expect(Card(title).Locator("[role=status]")).ToContainTextAsync(answer);
        }
    }
}
