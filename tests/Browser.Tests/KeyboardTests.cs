using Lampwarden.Host.Tests.Web.Support;

namespace Lampwarden.Browser.Tests;

/// <summary>Everything that matters can be done without a mouse.</summary>
public sealed class KeyboardTests(BrowserFixture browser)
{
    [Fact]
    public async Task SoakAndAcknowledge_ByKeyboardAlone()
    {
        await using var live = await LivePage.OpenAsync(speed: 10);
        await using var sight = await browser.LookAsync(live.Url, Screen.Laptop);
        await sight.Expect(".hero-word").ToHaveTextAsync("Not soaking");

        await TabToAsync(sight, "Start a soak");
        await sight.Page.Keyboard.PressAsync("Enter");
        await sight.Expect(".outlook-board").ToBeVisibleAsync();
        await TabToAsync(sight, "The mains is off");
        await sight.Page.Keyboard.PressAsync("Space");
        await TabToAsync(sight, "Start watching");
        await sight.Page.Keyboard.PressAsync("Enter");
        await sight.Expect(".hero-word").ToHaveTextAsync("Waiting for current");

        live.Bench.Amps = live.Plan.Prediction.Shorted.LineAmps;
        await Assertions.Expect(sight.Page.Locator(".hero")).ToHaveAttributeAsync("data-standing", "critical");
        await TabToAsync(sight, "Acknowledge");
        await sight.Page.Keyboard.PressAsync("Enter");

        await sight.Expect(".alert-head").ToContainTextAsync("acknowledged");
    }

    [Fact]
    public async Task Trace_ByKeys_ZoomsMovesAndComesBack()
    {
        await using var page = await QuietPage.OpenAsync();
        var run = await Runs.StoreAsync(page.Store, hours: 2);
        await using var sight = await browser.LookAsync(new Uri(page.Url, $"#/run/{run}"), Screen.Laptop);
        await sight.Expect(".zoom-keys [role=status]").ToContainTextAsync("2 h");
        await TabToAsync(sight, "Trace.");
        for (var press = 0; press < 14; press++)
        {
            await sight.Page.Keyboard.PressAsync("+");
        }

        await sight.Expect(".zoom-keys [role=status]").ToContainTextAsync(", 1 s");
        var before = await sight.TextAsync(".zoom-keys [role=status]");
        await sight.Page.Keyboard.PressAsync("ArrowRight");
        await sight.Page.Keyboard.PressAsync("ArrowRight");
        await sight.Page.Keyboard.PressAsync("ArrowRight");
        await sight.Page.Keyboard.PressAsync("ArrowRight");
        await sight.Page.Keyboard.PressAsync("ArrowRight");
        await Assertions.Expect(sight.Page.Locator(".zoom-keys [role=status]")).Not.ToHaveTextAsync(before);
        await sight.Page.Keyboard.PressAsync("Home");
        await sight.Expect(".zoom-keys [role=status]").ToContainTextAsync("2 h");
    }

    // Goes on by the tab key until what is focused says the words, and checks that the focus can be seen.
    private static async Task TabToAsync(Sight sight, string words)
    {
        const string Focused = """
            () => {
              const focused = document.activeElement;
              const label = focused.labels?.[0]?.textContent ?? "";
              const style = getComputedStyle(focused);
              return [focused.getAttribute("aria-label") ?? "", label, focused.textContent, style.outlineStyle].join("\n");
            }
            """;
        for (var press = 0; press < 60; press++)
        {
            await sight.Page.Keyboard.PressAsync("Tab");
            var focused = (await sight.Page.EvaluateAsync<string>(Focused)).Split('\n');
            if (focused.Take(3).Any(text => text.Contains(words, StringComparison.Ordinal)) && !focused[2].Contains("To the content", StringComparison.Ordinal))
            {
                Assert.NotEqual("none", focused[^1]);
                return;
            }
        }

        Assert.Fail($"The tab key never came to '{words}'.");
    }
}
