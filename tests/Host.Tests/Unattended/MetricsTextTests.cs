using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Life;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Tests.Alerting.Routes;
using Lampwarden.Host.Unattended;
using Microsoft.Extensions.Logging.Abstractions;
using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Host.Tests.Unattended;

public sealed class MetricsTextTests
{
    private readonly FakeTimeProvider _time = new(Told.Utc);

    [Fact]
    public async Task Write_AfterReadings_CountsThemByResultAndBalances()
    {
        var pulse = new Pulse(["bay-é\"1"], _time);
        pulse.Expect();
        await using var dispatch = new AlertDispatch(new AlertRules(), null, _time, NullLogger.Instance);
        using var telemetry = new Telemetry(pulse, () => new StoreHealth(7, 5, 2, 1, null, null), dispatch, ["bay-é\"1"], _time);
        using var metrics = new MetricsText();
        foreach (var amps in new[] { 0.4, 0.41, double.NaN, double.PositiveInfinity })
        {
            telemetry.Hear(new Observed("bay-é\"1", new Observation(1, amps), default, () => "") { Utc = _time.GetUtcNow() - TimeSpan.FromMilliseconds(3) });
        }

        telemetry.Hear(new AlertChanged("bay-é\"1", Told.Change()));
        var text = metrics.Write();
        Assert.Contains("# TYPE lampwarden_polls_total counter\n", text, StringComparison.Ordinal);
        Assert.Contains("lampwarden_polls_total{bench=\"bay-é\\\"1\",result=\"reading\"} 2\n", text, StringComparison.Ordinal);
        Assert.Contains("result=\"gap\"} 1\n", text, StringComparison.Ordinal);
        Assert.Contains("result=\"overload\"} 1\n", text, StringComparison.Ordinal);
        Assert.Contains("lampwarden_reading_handling_seconds_bucket{le=\"0.002\"} 0\n", text, StringComparison.Ordinal);
        Assert.Contains("lampwarden_reading_handling_seconds_bucket{le=\"0.005\"} 4\n", text, StringComparison.Ordinal);
        Assert.Contains("lampwarden_reading_handling_seconds_count 4\n", text, StringComparison.Ordinal);
        Assert.Contains("lampwarden_store_accepted_total 7\n", text, StringComparison.Ordinal);
        Assert.Contains("lampwarden_store_waiting 2\n", text, StringComparison.Ordinal);
        Assert.Contains("lampwarden_alert_changes_total{bench=\"bay-é\\\"1\",cause=\"hard-short\",severity=\"critical\",step=\"raised\"} 1\n", text, StringComparison.Ordinal);
    }
}
