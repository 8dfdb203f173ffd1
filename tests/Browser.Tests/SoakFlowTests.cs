using Lampwarden.Host.Tests.Web.Support;

namespace Lampwarden.Browser.Tests;

/// <summary>What a technician does in an evening, on a laptop and on a phone, against a simulated meter.</summary>
public sealed class SoakFlowTests(BrowserFixture browser)
{
    [Theory]
    [InlineData("laptop")]
    [InlineData("phone")]
    public async Task Evening_FromTheStartToTheRecord(string screen)
    {
        await using var live = await LivePage.OpenAsync(speed: 10);
        await using var sight = await browser.LookAsync(live.Url, Screen.Of(screen));
        var page = sight.Page;
        await sight.Expect(".hero-word").ToHaveTextAsync("Not soaking");

        // Start a soak: the prediction and the cautions come before the button.
        await sight.GoAsync("#/start");
        await page.GetByLabel("Unit", new() { Exact = false }).First.FillAsync("resistor 300 ohm");
        await page.GetByLabel("Hours to soak").FillAsync("2");
        await sight.Expect(".outlook-board").ToBeVisibleAsync();
        await sight.Expect(".outlook-numbers").ToContainTextAsync("contrast");
        await sight.Expect(".caution h3").ToHaveTextAsync("Before mains is switched on");
        await sight.PictureAsync("start", whole: true);
        await page.GetByText("The mains is off, and I have read this.").ClickAsync();
        await page.GetByRole(AriaRole.Button, new() { Name = "Start watching" }).ClickAsync();
        await sight.Expect(".hero-word").ToHaveTextAsync("Waiting for current");
        await sight.Expect(".lamp .words").ToHaveTextAsync("dark");

        // Switch on: the glow follows the current.
        var steady = live.Plan.Prediction.Steady.LineAmps;
        live.Bench.Amps = steady;
        await Assertions.Expect(page.Locator(".lamp .words").First).Not.ToHaveTextAsync("dark");
        var dim = double.Parse(await page.Locator(".lamp .halo").First.GetAttributeAsync("opacity") ?? "", System.Globalization.CultureInfo.InvariantCulture);
        await sight.Expect(".readouts .of-unit .value").ToContainTextAsync("V");
        await sight.Expect(".u-over").ToBeVisibleAsync();
        await Assertions.Expect(page.Locator(".hero")).ToHaveAttributeAsync("data-standing", "settling");
        await page.WaitForFunctionAsync("() => document.querySelector('.hero-time dd').textContent > '0:00:20'");

        // What somebody did is told in one press, and stands in the record later.
        await page.GetByLabel("What you did, in your own words").FillAsync("The fan is on now");
        await page.GetByRole(AriaRole.Button, new() { Name = "The unit switches by itself" }).FocusAsync();
        await page.Keyboard.PressAsync("Enter");
        await sight.Expect(".tell [role=status]").ToContainTextAsync("counts as healthy");
        await sight.PictureAsync("told", whole: true);

        // A dead short: seen across the room, and acknowledged.
        live.Bench.Amps = live.Plan.Prediction.Shorted.LineAmps;
        await Assertions.Expect(page.Locator(".hero")).ToHaveAttributeAsync("data-standing", "critical");
        await sight.Expect(".lamp .words").ToHaveTextAsync("full");
        var bright = double.Parse(await page.Locator(".lamp .halo").First.GetAttributeAsync("opacity") ?? "", System.Globalization.CultureInfo.InvariantCulture);
        Assert.True(bright > 2 * dim, $"halo {dim} healthy, {bright} shorted");
        await sight.Expect(".hero-deed").ToContainTextAsync("switch the mains off");
        await sight.PictureAsync("critical");
        Assert.Contains(",", await page.TitleAsync(), StringComparison.Ordinal);
        await page.GetByLabel("Note").First.FillAsync("The rectifier is hot");
        await page.GetByRole(AriaRole.Button, new() { Name = "Keep note" }).First.ClickAsync();
        await Assertions.Expect(page.GetByText("Kept with the run.").First).ToBeVisibleAsync();
        await page.GetByRole(AriaRole.Button, new() { Name = "Acknowledge" }).First.ClickAsync();
        await sight.Expect(".alert-head").ToContainTextAsync("acknowledged");

        // End it, and look back down to one second.
        live.Bench.Amps = 0;
        await page.GetByRole(AriaRole.Button, new() { Name = "End this soak" }).ClickAsync();
        await page.GetByRole(AriaRole.Button, new() { Name = "End it now" }).ClickAsync();
        await Assertions.Expect(page.Locator(".hero")).ToHaveAttributeAsync("data-standing", "failed");
        await page.GetByRole(AriaRole.Link, new() { Name = "Look back at this run" }).ClickAsync();
        await sight.Expect(".run-head .badge").ToContainTextAsync("Failed");
        await sight.Expect(".finding-list .badge").ToBeVisibleAsync();
        await sight.Expect(".u-over").ToBeVisibleAsync();
        await sight.PictureAsync("look-back", whole: true);
        await page.GetByRole(AriaRole.Button, new() { Name = "Show 1 s", Exact = true }).ClickAsync();
        await sight.Expect(".zoom-keys [role=status]").ToContainTextAsync("1 s");
        await Assertions.Expect(page.GetByText("The rectifier is hot")).ToBeVisibleAsync();
        await Assertions.Expect(page.GetByText("The fan is on now")).ToBeVisibleAsync();
        var download = await page.RunAndWaitForDownloadAsync(() => page.GetByRole(AriaRole.Link, new() { Name = "CSV" }).ClickAsync());
        Assert.StartsWith("seconds,amps", await File.ReadAllTextAsync(await download.PathAsync(), TestContext.Current.CancellationToken), StringComparison.Ordinal);
    }

    [Fact]
    public async Task BringUp_LampAfterLamp_IsRecognisedByTheCurrent()
    {
        await using var live = await LivePage.OpenAsync(speed: 10);
        await using var sight = await browser.LookAsync(live.Url, Screen.Laptop);
        var page = sight.Page;
        await sight.Expect(".hero-word").ToHaveTextAsync("Not soaking");
        await sight.GoAsync("#/start");
        await page.GetByLabel("Unit", new() { Exact = false }).First.FillAsync("resistor 450 ohm");
        await Assertions.Expect(page.GetByLabel("Bring it up lamp by lamp")).ToBeEnabledAsync();
        await page.GetByText("Bring it up lamp by lamp").ClickAsync();
        await Assertions.Expect(page.Locator(".steps li")).ToHaveCountAsync(2);
        await page.GetByText("The mains is off, and I have read this.").ClickAsync();
        await page.GetByRole(AriaRole.Button, new() { Name = "Start watching" }).ClickAsync();
        await sight.Expect(".hero-word").ToHaveTextAsync("Waiting for current");

        var (first, second) = (Steady("25 W 120 V"), Steady("60 W 120 V || 25 W 120 V"));
        live.Bench.Amps = first;
        await sight.Expect(".bring-say").ToContainTextAsync("Switch in");
        await Assertions.Expect(page.Locator(".circuit .lamp")).ToHaveCountAsync(1);
        await sight.PictureAsync("bring-up");
        live.Bench.Amps = second;
        await Assertions.Expect(page.Locator(".circuit .lamp")).ToHaveCountAsync(2);
        await Assertions.Expect(page.Locator(".bring-up")).ToBeHiddenAsync();
        Assert.Equal("No alert is open.", await sight.TextAsync(".alert-box > p"));

        static double Steady(string bank) => Host.Soaking.BenchPlan.From(QuietPage.Bench("x", bank, "resistor 450 ohm"), Analysis.Lamps.LampInventory.Empty).Prediction.Steady.LineAmps;
    }
}
