using Lampwarden.Acquisition;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Reporting;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Tests.Recording;

namespace Lampwarden.Host.Tests.Reporting;

public sealed class ReferenceUnitsTests : IDisposable
{
    private const string Model = "kitchen radio";
    private const string Mains = "120 V 60 Hz";

    // The run's inrush falls as 0.78 A * exp(-t / 1 s) and is within 10 % from t = 3 s on, so the mean over the first tenth of
    // 4,001 s holds its tail: 0.78 A * exp(-3) / (1 - exp(-1)) / 401.
    private const double SettledAmps = 0.42 + 0.000153;

    private readonly TempFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public async Task BandFor_SameBank_IsNarrowerThanPhysicsAndAroundTheReference()
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        var run = await ReportTests.RecordAsync(store, verdict: Verdict.Passed);
        await store.SetReferenceAsync(Model, run);
        var band = ReferenceUnits.BandFor(store, Model, "75 W || 25 W", Mains, 0.41)!;
        Assert.Equal(SettledAmps, band.SteadyAmps, 1e-5);
        Assert.InRange(band.HighAmps - band.LowAmps, 0.01, 0.45 - 0.38);
        Assert.InRange(0.42, band.LowAmps, band.HighAmps);
    }

    [Fact]
    public async Task BandFor_OtherBank_IsCarriedOverByThePredictionsAndWider()
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        await store.SetReferenceAsync(Model, await ReportTests.RecordAsync(store, verdict: Verdict.Passed));
        var same = ReferenceUnits.BandFor(store, Model, "75 W || 25 W", Mains, 0.41)!;
        var other = ReferenceUnits.BandFor(store, Model, "150 W", Mains, 0.82)!;
        Assert.Equal(2 * SettledAmps, other.SteadyAmps, 2e-5);
        Assert.True((other.HighAmps - other.LowAmps) / other.SteadyAmps > (same.HighAmps - same.LowAmps) / same.SteadyAmps);
    }

    [Fact]
    public void HeldTo_Reference_IsWhatTheWatchExpects()
    {
        var options = new BenchOptions
        {
            Name = "left", Mains = Mains, Bank = "75 W || 25 W", Unit = "resistor 200 ohm", UnitModel = Model, Meters = [new MeterOptions()],
        };
        var plan = BenchPlan.From(options, LampInventory.Empty);
        var held = plan.HeldTo(new ReferenceBand(Model, "20260402-001", 0.42, 0.40, 0.44, "")).WatchSettings.Expectation!;
        Assert.Equal((0.42, 0.40, 0.44), (held.SteadyAmps, held.BandLowAmps, held.BandHighAmps));
        Assert.Equal(plan.WatchSettings.Expectation!.ShortedAmps, held.ShortedAmps);
        Assert.Same(plan, plan.HeldTo(null));
    }

    [Fact]
    public async Task BandFor_ModelWithoutReference_IsNone()
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        await ReportTests.RecordAsync(store, verdict: Verdict.Passed);
        Assert.Null(ReferenceUnits.BandFor(store, Model, "75 W || 25 W", Mains, 0.41));
    }

    [Fact]
    public async Task SetReference_OfAFailedRun_IsRefused()
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        var run = await ReportTests.RecordAsync(store);
        var refused = await Assert.ThrowsAsync<StoreException>(() => store.SetReferenceAsync(Model, run));
        Assert.Contains("has not passed", refused.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(0.47, "loads the bank more")]
    [InlineData(0.425, "inside the band")]
    [InlineData(0.37, "does not run as in its like")]
    public async Task Explain_NextUnit_SaysHowItLies(double amps, string told)
    {
        using var store = SoakStore.Open(_folder.Path, TimeProvider.System);
        await store.SetReferenceAsync(Model, await ReportTests.RecordAsync(store, verdict: Verdict.Passed));
        var next = await ReportTests.RecordAsync(store, amps: amps);
        var band = ReferenceUnits.BandFor(store, Model, "75 W || 25 W", Mains, 0.41)!;
        Assert.Contains(told, ReferenceUnits.Explain(band, RunFigures.Of(store, next)), StringComparison.Ordinal);
    }
}
