using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Acquisition.Tests;

public sealed class SessionClockTests
{
    private readonly HealthBook _health = new();

    [Fact]
    public void Utc_WallClockSet_FollowsItTellsItAndLeavesIntervalsAlone()
    {
        var time = new SteppingTime();
        var clock = new SessionClock(time, time.GetTimestamp(), _health);
        time.Advance(TimeSpan.FromSeconds(10));
        var before = clock.Utc(clock.Now);
        var elapsed = clock.ElapsedSeconds(clock.Now);

        time.Step = TimeSpan.FromHours(-1);
        time.Advance(TimeSpan.FromSeconds(5));
        var after = clock.Utc(clock.Now);

        Assert.Equal(TimeSpan.FromSeconds(5 - 3600), after - before);
        Assert.Equal(5, clock.ElapsedSeconds(clock.Now) - elapsed, 9);
        var health = _health.Snapshot();
        Assert.Equal((1, -3600.0), (health.ClockSteps, Math.Round(health.WallClockOffsetSeconds, 6)));
        Assert.Contains("the wall clock jumped by -3600.0 s", Assert.Single(health.Problems), StringComparison.Ordinal);
    }

    [Fact]
    public void Utc_WallClockSlewed_IsDriftAndNoStep()
    {
        var time = new SteppingTime();
        var clock = new SessionClock(time, time.GetTimestamp(), _health);
        for (var hour = 1; hour <= 24; hour++)
        {
            time.Advance(TimeSpan.FromHours(1));
            time.Step = TimeSpan.FromSeconds(0.18 * hour); // 50 parts per million
            clock.Utc(clock.Now);
        }

        var health = _health.Snapshot();
        Assert.Equal((0, 4.32), (health.ClockSteps, Math.Round(health.WallClockOffsetSeconds, 6)));
        Assert.Empty(health.Problems);
    }

    [Fact]
    public void Utc_OfAnEarlierStamp_LiesThatMuchEarlier()
    {
        var time = new SteppingTime();
        var clock = new SessionClock(time, time.GetTimestamp(), _health);
        var stamp = clock.Now;
        time.Advance(TimeSpan.FromMilliseconds(250));

        Assert.Equal(TimeSpan.FromMilliseconds(250), clock.Utc(clock.Now) - clock.Utc(stamp));
    }

    /// <summary>A clock whose wall time can be set without its monotonic time.</summary>
    private sealed class SteppingTime : FakeTimeProvider
    {
        public TimeSpan Step { get; set; }

        public override DateTimeOffset GetUtcNow() => base.GetUtcNow() + Step;

        public override long GetTimestamp() => base.GetUtcNow().Ticks;
    }
}
