using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Acquisition.Tests;

public sealed class PollScheduleTests
{
    private readonly FakeTimeProvider _time = new();

    [Fact]
    public void SecondsToNext_PollsOfUnevenLength_KeepToTheGrid()
    {
        var schedule = new PollSchedule(_time, 10);
        var begins = new List<double>();
        foreach (var work in (double[])[0.01, 0.09, 0.003, 0.05, 0.0, 0.07])
        {
            _time.Advance(TimeSpan.FromSeconds(Math.Max(0, schedule.SecondsToNext)));
            schedule.Begin();
            begins.Add(Elapsed());
            _time.Advance(TimeSpan.FromSeconds(work));
            Assert.Equal(0, schedule.End());
        }

        Assert.Equal([0, 0.1, 0.2, 0.3, 0.4, 0.5], begins.Select(one => Math.Round(one, 6)));
    }

    [Fact]
    public void SecondsToNext_ADayOfLateWakeUps_DoesNotDrift()
    {
        var schedule = new PollSchedule(_time, 5);
        const int Polls = 24 * 3600 * 5;
        for (var poll = 0; poll < Polls; poll++)
        {
            _time.Advance(TimeSpan.FromSeconds(Math.Max(0, schedule.SecondsToNext) + 0.0007));
            schedule.Begin();
            schedule.End();
        }

        Assert.Equal(Polls * 0.2, Elapsed() + schedule.SecondsToNext, 0.001);
    }

    [Fact]
    public void End_AfterAStall_LeavesOutThePointsThatPassed()
    {
        var schedule = new PollSchedule(_time, 10);
        schedule.Begin();
        schedule.End();

        _time.Advance(TimeSpan.FromSeconds(7.34));
        var late = schedule.Begin();
        var skipped = schedule.End();

        Assert.Equal(7.24, late, 6);
        Assert.Equal(72, skipped); // points 2 to 73: the one at 0.1 s was taken, late, and 7.4 s is next
        Assert.Equal(0.06, schedule.SecondsToNext, 6);
    }

    [Fact]
    public void HurryFor_SomeSeconds_UsesTheTimeBetweenThePointsAndThenKeepsToThemAgain()
    {
        var schedule = new PollSchedule(_time, 0.5);
        schedule.Begin();
        schedule.End();
        schedule.HurryFor(TimeSpan.FromSeconds(1));
        var hurried = 0;
        while (schedule.SecondsToNext < 0.5)
        {
            _time.Advance(TimeSpan.FromSeconds(Math.Max(0, schedule.SecondsToNext)));
            schedule.Begin();
            _time.Advance(TimeSpan.FromSeconds(0.04)); // what the meter takes
            Assert.Equal(0, schedule.End());
            hurried++;
        }

        Assert.InRange(hurried, 24, 26);
        Assert.Equal(2, Elapsed() + schedule.SecondsToNext, 6);
    }

    private double Elapsed() => (_time.GetUtcNow() - _time.Start).TotalSeconds;
}
