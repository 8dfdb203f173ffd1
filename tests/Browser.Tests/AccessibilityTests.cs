using System.Text.Json;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Tests.Web.Support;

namespace Lampwarden.Browser.Tests;

/// <summary>axe-core finds no serious fault on any view, on either screen.</summary>
public sealed class AccessibilityTests(BrowserFixture browser)
{
    private static readonly string Axe = Path.Combine(AppContext.BaseDirectory, "axe.min.js");

    [Fact]
    public async Task EveryView_HasNoSeriousFault()
    {
        Outside.Need(File.Exists(Axe), "axe-core is not there: the tests were built without npm");
        await using var page = await QuietPage.OpenAsync(null, null, "attic", "cellar", "yard");
        PageTests.Soak(page, page.Plans[0], 0.24);
        PageTests.Soak(page, page.Plans[1], 0.24);
        PageTests.Raise(page, "attic", Signature.DevelopingShort, Severity.Warning);
        PageTests.Raise(page, "cellar", Signature.HardShort, Severity.Critical);
        var run = await Runs.StoreAsync(page.Store, 0.2);
        var other = await Runs.StoreAsync(page.Store, 0.2);
        await using var sight = await browser.LookAsync(page.Url, Screen.Laptop);
        await sight.Expect(".tile").ToBeVisibleAsync();
        var axe = await File.ReadAllTextAsync(Axe, TestContext.Current.CancellationToken);
        await sight.Page.EvaluateAsync(axe);
        (string Hash, string Wait)[] views =
        [
            ("#/benches", ".tile"), ("#/bench/attic", ".u-over"), ("#/bench/cellar", ".u-over"), ("#/start", ".outlook-board"), 
            ("#/runs", "tbody tr"), ($"#/run/{run}", ".u-over"), ($"#/run/{run}/{other}", ".u-over"), ("#/meters", "h1"), ("#/watcher", "h1"),
        ];
        var faults = new List<string>();
        foreach (var (hash, wait) in views)
        {
            await sight.Page.SetViewportSizeAsync(Screen.Laptop.Width, Screen.Laptop.Height);
            await sight.GoAsync(hash);
            await sight.Expect(wait).ToBeVisibleAsync();
            faults.AddRange(await FaultsAsync(sight, hash));
            await sight.Page.SetViewportSizeAsync(Screen.Phone.Width, Screen.Phone.Height);
            faults.AddRange(await FaultsAsync(sight, hash + " on a phone"));
        }

        Assert.Empty(faults);
    }

    private static async Task<IEnumerable<string>> FaultsAsync(Sight sight, string view)
    {
        // A host starved by other work is silent, and the page then greys itself: wait until it is live again.
        await Assertions.Expect(sight.Page.Locator("body")).Not.ToHaveClassAsync("old");
        var found = await sight.Page.EvaluateAsync<JsonElement>("""
            async () => (await axe.run(document, { resultTypes: ["violations"] })).violations
              .filter((fault) => ["serious", "critical"].includes(fault.impact))
              .map((fault) => ({ id: fault.id, where: fault.nodes.map((node) => node.target.join(" ") + ": " + node.failureSummary).join("\n") }))
            """);
        return found.EnumerateArray().Select(fault => $"{view}: {fault.GetProperty("id")} at {fault.GetProperty("where")}");
    }
}
