using System.Text.RegularExpressions;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Tests.Web.Support;
using Lampwarden.Host.Web.Access;

namespace Lampwarden.Browser.Tests;

/// <summary>Views over benches that stand as a test says.</summary>
public sealed class PageTests(BrowserFixture browser)
{
    [Fact]
    public async Task FortyBenches_AreTiles_TheWorstFirst()
    {
        await using var page = await QuietPage.OpenAsync(null, null, [.. Enumerable.Range(1, 40).Select(number => $"bench {number}")]);
        foreach (var plan in page.Plans)
        {
            Soak(page, plan, plan.Prediction.Steady.LineAmps);
        }

        Raise(page, "bench 31", Signature.DevelopingShort, Severity.Warning);
        Raise(page, "bench 17", Signature.HardShort, Severity.Critical);
        page.Board.Hear(new Observed("bench 23", new Observation(9000, double.NaN), WatchPhase.Watching, () => "No reading."));
        foreach (var screen in new[] { Screen.Laptop, Screen.Phone })
        {
            await using var sight = await browser.LookAsync(page.Url, screen);
            await Assertions.Expect(sight.Page.Locator(".tile")).ToHaveCountAsync(40);
            await Assertions.Expect(sight.Page.Locator(".tile-name").First).ToHaveTextAsync("bench 17");
            var names = await sight.Page.Locator(".tile-name").AllTextContentsAsync();
            Assert.Equal("bench 17, bench 31, bench 23, bench 1", string.Join(", ", names.Take(4)));
            var words = await sight.Page.Locator(".tile-word").AllTextContentsAsync();
            Assert.Equal(["Hard short", "Developing short", "No readings", "Holding"], words.Take(4));
            Assert.StartsWith("Hard short: bench 17", await sight.Page.TitleAsync(), StringComparison.Ordinal);
            await sight.PictureAsync("forty-benches");
        }
    }

    [Theory]
    [InlineData("laptop")]
    [InlineData("phone")]
    public async Task DevelopingShort_IsSeenFromThreeMetres_BeforeItIsCritical(string screen)
    {
        await using var page = await QuietPage.OpenAsync();
        Soak(page, page.Plans[0], 0.306, creep: 0.046);
        await using var sight = await browser.LookAsync(page.Url, Screen.Of(screen));
        await sight.Expect(".hero-word").ToHaveTextAsync("Holding");
        await sight.PictureAsync("holding");

        Raise(page, "attic", Signature.DevelopingShort, Severity.Warning);

        await sight.Expect(".hero-word").ToHaveTextAsync("Developing short");
        await Assertions.Expect(sight.Page.Locator(".hero")).ToHaveAttributeAsync("data-standing", "warning");
        var height = await sight.Page.EvaluateAsync<double>("parseFloat(getComputedStyle(document.querySelector('.hero-number')).fontSize)");
        // Digits are some 0.7 of the font's size; 15 mm at 4.6 px/mm of a laptop are 69 px. A telephone is held in the hand.
        Assert.True(screen == "phone" ? height >= 48 : height * 0.7 >= 69, $"{height} px");
        await sight.PictureAsync("developing-short");
    }

    [Fact]
    public async Task Shelved_AnAlert_LeavesTheStripAndComesBackInTheList()
    {
        await using var page = await QuietPage.OpenAsync();
        Soak(page, page.Plans[0], 0.306);
        Raise(page, "attic", Signature.MainsShift, Severity.Warning, AlertState.Shelved);
        await using var sight = await browser.LookAsync(page.Url, Screen.Laptop);

        await sight.Expect(".hero-word").ToHaveTextAsync("Holding");
        await Assertions.Expect(sight.Page.GetByRole(AriaRole.Button, new() { Name = "Back from the shelf" })).ToBeVisibleAsync();
    }

    [Fact]
    public async Task HostGone_ThePageSaysThatItIsOld()
    {
        await using var page = await QuietPage.OpenAsync();
        Soak(page, page.Plans[0], 0.306);
        await using var sight = await browser.LookAsync(page.Url, Screen.Laptop);
        await sight.Expect(".hero-word").ToHaveTextAsync("Holding");
        sight.Allowed = new Regex("ERR_|Failed to load");

        await page.StopAsync();

        await sight.Expect("#stale").ToBeVisibleAsync();
        await sight.Expect("#stale").ToContainTextAsync("look at the bench itself");
        await Assertions.Expect(sight.Page.Locator("body")).ToHaveClassAsync("old");
        Assert.StartsWith("Not live", await sight.Page.TitleAsync(), StringComparison.Ordinal);
        await sight.PictureAsync("host-gone");
    }

    [Fact]
    public async Task Token_Wanted_ThePageAsksForItAndSaysHowToMakeOne()
    {
        var file = Path.GetTempFileName();
        var token = PageToken.Make();
        await File.WriteAllTextAsync(file, token, TestContext.Current.CancellationToken);
        await using var page = await QuietPage.OpenAsync(new WebOptions { Address = "http://0.0.0.0:0", TokenFile = file });
        await using var sight = await browser.LookAsync(page.Url, Screen.Phone);
        sight.Allowed = new Regex("401");
        await sight.Expect("h1").ToHaveTextAsync("This page wants a token");
        await Assertions.Expect(sight.Page.GetByText("lampwarden token page.token")).ToBeVisibleAsync();
        await sight.PictureAsync("token");

        await sight.Page.GetByLabel("Token").FillAsync("not the token");
        await sight.Page.GetByRole(AriaRole.Button, new() { Name = "Open the page" }).ClickAsync();
        await sight.Expect(".problem").ToContainTextAsync("not the token");
        await sight.Page.GetByLabel("Token").FillAsync(token);
        await sight.Page.GetByRole(AriaRole.Button, new() { Name = "Open the page" }).ClickAsync();

        await sight.Expect(".hero-word").ToBeVisibleAsync();
        Assert.DoesNotContain(token, await sight.Page.ContentAsync(), StringComparison.Ordinal);
        File.Delete(file);
    }

    [Theory]
    [InlineData("laptop")]
    [InlineData("phone")]
    public async Task ChooseABank_ShowsHealthBesideAShort(string screen)
    {
        await using var page = await QuietPage.OpenAsync();
        await using var sight = await browser.LookAsync(new Uri(page.Url, "#/choose"), Screen.Of(screen));
        await Assertions.Expect(sight.Page.Locator(".choices li")).ToHaveCountAsync(40);
        await sight.Page.GetByLabel("Unit").FillAsync("resistor 240 ohm");
        await sight.Page.GetByLabel("Lamps at hand").FillAsync("25 W, 60 W, 100 W");
        await sight.Page.GetByRole(AriaRole.Button, new() { Name = "Rank the banks" }).ClickAsync();
        await sight.Expect("#choices + p").Not.ToContainTextAsync("best 40");
        await sight.Expect(".choices li").ToContainTextAsync("Fits.");

        Assert.Equal("full", (await sight.Page.Locator(".choices li").First.Locator(".lamp-row").Nth(1).TextContentAsync())?.Trim());
        Assert.NotEqual("full", (await sight.Page.Locator(".choices li").First.Locator(".lamp-row").Nth(0).TextContentAsync())?.Trim());
        await sight.Expect(".steps li").ToContainTextAsync("mains off");
        await sight.PictureAsync("choose");
    }

    [Fact]
    public async Task TwoRuns_AreComparedOverlaid()
    {
        await using var page = await QuietPage.OpenAsync();
        await Runs.StoreAsync(page.Store, 0.5);
        await Runs.StoreAsync(page.Store, 0.4, amps: 0.35);
        await using var sight = await browser.LookAsync(new Uri(page.Url, "#/runs"), Screen.Laptop);
        await Assertions.Expect(sight.Page.Locator("tbody tr")).ToHaveCountAsync(2);
        await sight.PictureAsync("runs");

        foreach (var box in await sight.Page.Locator("tbody input").AllAsync())
        {
            await box.CheckAsync();
        }

        await sight.Page.GetByRole(AriaRole.Button, new() { Name = "Compare the two chosen" }).ClickAsync();
        await sight.Expect("h1").ToHaveTextAsync("Two runs compared");
        await sight.Expect(".u-over").ToBeVisibleAsync();
        await Assertions.Expect(sight.Page.Locator(".legend span")).ToHaveCountAsync(2);
        await sight.PictureAsync("compared");
    }

    internal static void Soak(QuietPage page, BenchPlan plan, double amps, double creep = 0)
    {
        page.Board.Hear(new RunBegan(plan.Name, "20260402-001", plan, DateTimeOffset.UnixEpoch.AddDays(20545)));
        page.Board.Hear(new DeskChanged(plan.Name, Idle: false, CanStart: false, CanEnd: true));
        for (var second = 0; second < 3600; second += 10)
        {
            var seen = new Observation(second, second == 0 ? plan.Prediction.Inrush.FirstReadingAmps : amps * (1 + (0.004 * Math.Sin(second / 200.0)) + (second < 2400 ? 0 : creep * Math.Pow((second - 2400) / 1200.0, 2))));
            page.Board.Hear(new Observed(plan.Name, seen, WatchPhase.Watching, () => "All is well: the unit draws what it should."));
        }
    }

    internal static void Raise(QuietPage page, string bench, Signature signature, Severity severity, AlertState state = AlertState.Unacknowledged)
    {
        const string Text = "The current has crept up by 4.6 % in 40 minutes and keeps rising: look first at what gets warm.";
        var finding = new Finding(1, signature, severity, 3000, 3400, null, Text, new Dictionary<string, double>());
        page.Board.Hear(new FindingChanged(bench, 3400, new FindingChange(ChangeKind.Raised, finding)));
        var alert = new Alert(bench, 1, signature.Text(), severity, state, 3400, Text) { Standing = true, FindingNumber = 1 };
        page.Board.Hear(new AlertChanged(bench, new AlertChange(3400, AlertSteps.Raised, alert)));
        if (state == AlertState.Unacknowledged)
        {
            page.Board.Hear(new Observed(bench, new Observation(3600, page.Plans[0].Prediction.Steady.LineAmps * 1.046), WatchPhase.Watching, () => Text));
        }
    }
}
