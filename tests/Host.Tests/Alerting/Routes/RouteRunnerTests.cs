using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Routes;
using Microsoft.Extensions.Logging.Abstractions;
using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Host.Tests.Alerting.Routes;

public sealed class RouteRunnerTests
{
    private readonly FakeTimeProvider _time = new(Told.Utc);
    private readonly List<(RouteState State, int Untold)> _turns = [];

    private RouteRunner Run(IAlertRoute route, RouteSettings? settings = null) => new(
        route, (settings ?? new RouteSettings()) with { LastChance = TimeSpan.FromMilliseconds(100) }, _time, NullLogger.Instance, (runner, untold) => _turns.Add((runner.Health.State, untold.Count)));

    private static void Balances(RouteHealth health) =>
        Assert.Equal(health.Taken, health.Told + health.GivenUp + health.Dropped + health.Waiting);

    [Fact]
    public async Task Tell_AWorkingRoute_TellsInOrder()
    {
        var route = ScriptedRoute.Working();
        await using var runner = Run(route);
        for (var number = 1; number <= 5; number++)
        {
            runner.Tell(Told.Change(number));
        }

        await Patience.UntilAsync(() => route.Told.Count == 5);
        Assert.Equal([1, 2, 3, 4, 5], route.Told.Select(change => change.Alert.Number));
        Assert.Equal((RouteState.Working, 5L, 0L), (runner.Health.State, runner.Health.Told, runner.Health.Waiting));
    }

    [Fact]
    public async Task Tell_FailingThreeTimes_TriesAgainUntilTold()
    {
        var left = 3;
        var route = new ScriptedRoute((_, _) => left-- > 0 ? throw new RouteException("not now") : Task.CompletedTask);
        await using var runner = Run(route);
        runner.Tell(Told.Change());
        await Patience.UntilAsync(() => route.Told.Count == 1, _time);
        Assert.Equal(4, route.Attempts);
        Assert.Equal((RouteState.Working, null), (runner.Health.State, runner.Health.LastError));
        Assert.Empty(_turns);
    }

    [Fact]
    public async Task Tell_FailingForAMinute_IsDownOnceAndThenWorksAgain()
    {
        var dead = true;
        var route = new ScriptedRoute((_, _) => dead ? throw new RouteException("not now") : Task.CompletedTask);
        await using var runner = Run(route);
        runner.Tell(Told.Change());
        await Patience.UntilAsync(() => _turns.Count == 1, _time);
        Assert.Equal((RouteState.Down, 1), _turns[0]);
        Assert.Equal("not now", runner.Health.LastError);
        dead = false;
        await Patience.UntilAsync(() => _turns.Count == 2, _time);
        Assert.Equal((RouteState.Working, 0), _turns[1]);
        Assert.Single(route.Told);
        Balances(runner.Health);
    }

    [Fact]
    public async Task Tell_DeadForGood_GivesUpAfterItsDeadlineAndTriesTheNext()
    {
        var route = ScriptedRoute.Dead();
        await using var runner = Run(route, new RouteSettings { GiveUp = TimeSpan.FromMinutes(5) });
        runner.Tell(Told.Change(1));
        await Patience.UntilAsync(() => runner.Health.GivenUp == 1, _time, 5);
        var attempts = route.Attempts;
        runner.Tell(Told.Change(2));
        await Patience.UntilAsync(() => route.Attempts > attempts, _time, 0.1);
        Assert.Single(_turns);
        Balances(runner.Health);
    }

    [Fact]
    public async Task Tell_Refused_IsNotTriedAgain()
    {
        var route = new ScriptedRoute((_, _) => throw new RouteRefusedException("wrong secret"));
        await using var runner = Run(route);
        runner.Tell(Told.Change());
        await Patience.UntilAsync(() => runner.Health.GivenUp == 1);
        Assert.Equal(1, route.Attempts);
        Assert.Equal((RouteState.Down, 1), _turns[0]);
        Assert.Equal("wrong secret", runner.Health.LastError);
    }

    [Fact]
    public async Task Tell_ARouteThatIgnoresItsToken_IsLeftBehindAtTheDeadline()
    {
        var never = new TaskCompletionSource();
        var route = new ScriptedRoute((_, _) => never.Task);
        await using var runner = Run(route, new RouteSettings { Attempt = TimeSpan.FromSeconds(10) });
        runner.Tell(Told.Change());
        await Patience.UntilAsync(() => route.Attempts >= 3, _time);
        Assert.Equal("no answer within 10 s", runner.Health.LastError);
    }

    [Fact]
    public async Task Tell_AskedToWait_WaitsThatLong()
    {
        var stamps = new List<DateTimeOffset>();
        var route = new ScriptedRoute((_, _) =>
        {
            stamps.Add(_time.GetUtcNow());
            return stamps.Count == 1 ? throw new RouteException("busy") { RetryAfter = TimeSpan.FromSeconds(40) } : Task.CompletedTask;
        });
        await using var runner = Run(route);
        runner.Tell(Told.Change());
        await Patience.UntilAsync(() => stamps.Count == 2, _time, 0.5);
        Assert.InRange((stamps[1] - stamps[0]).TotalSeconds, 40, 45);
    }

    [Fact]
    public async Task Tell_MoreThanTheRateLimit_HoldsAndThenGroupsTheRest()
    {
        var route = ScriptedRoute.Working();
        await using var runner = Run(route, new RouteSettings { AtMostPerMinute = 3 });
        for (var number = 1; number <= 8; number++)
        {
            runner.Tell(Told.Change(number, what: AlertSteps.Amended));
        }

        await Patience.UntilAsync(() => route.Told.Count == 3);
        await Patience.SettleAsync();
        Assert.Equal(3, route.Told.Count);
        await Patience.UntilAsync(() => route.Told.Count == 4, _time);
        Assert.Equal([4, 5, 6, 7, 8], route.Told[3].Group!.Select(change => change.Alert.Number));
        Assert.Equal(8, runner.Health.Told);
    }

    [Fact]
    public async Task Tell_AFlood_IsGroupedAndNothingIsLeftOut()
    {
        var route = ScriptedRoute.Working();
        await using var runner = Run(route, new RouteSettings { AtMostPerMinute = 600 });
        for (var number = 1; number <= 40; number++)
        {
            runner.Tell(Told.Change(number, Severity.Warning, bench: $"bay-{number}"));
        }

        await Patience.UntilAsync(() => runner.Health.Told == 40, _time);
        var numbers = route.Told.SelectMany(change => change.Group ?? [change]).Select(change => change.Alert.Number);
        Assert.Equal(Enumerable.Range(1, 40), numbers);
        Assert.InRange(route.Told.Count, 1, 12);
        Assert.Contains("one common cause", route.Told[^1].Alert.Text, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Tell_CriticalInAFlood_WaitsTenSecondsAtMost()
    {
        var route = ScriptedRoute.Working();
        await using var runner = Run(route, new RouteSettings { AtMostPerMinute = 600 });
        for (var number = 1; number <= 20; number++)
        {
            runner.Tell(Told.Change(number, Severity.Warning));
        }

        await Patience.UntilAsync(() => runner.Health.Told == 20, _time);
        var before = _time.GetUtcNow();
        runner.Tell(Told.Change(99));
        await Patience.UntilAsync(() => runner.Health.Told == 21, _time);
        Assert.InRange((_time.GetUtcNow() - before).TotalSeconds, 0, 14);
    }

    [Fact]
    public async Task Tell_ToAMachine_IsNeverGrouped()
    {
        var route = ScriptedRoute.Working();
        await using var runner = Run(route, new RouteSettings { AtMostPerMinute = int.MaxValue, Groups = false });
        for (var number = 1; number <= 40; number++)
        {
            runner.Tell(Told.Change(number, Severity.Warning));
        }

        await Patience.UntilAsync(() => runner.Health.Told == 40, _time, 10);
        Assert.All(route.Told, change => Assert.Null(change.Group));
    }

    [Fact]
    public async Task Tell_AFullQueue_DropsTheOldestCountsItAndNeverWaits()
    {
        var never = new TaskCompletionSource();
        await using var runner = Run(new ScriptedRoute((_, _) => never.Task), new RouteSettings { QueueLength = 4, Attempt = TimeSpan.FromHours(1) });
        runner.Tell(Told.Change(0));
        await Patience.UntilAsync(() => runner.Health.Waiting == 1);
        await Patience.SettleAsync();
        for (var number = 1; number <= 1000; number++)
        {
            runner.Tell(Told.Change(number));
        }

        Assert.InRange(runner.Health.Dropped, 995, 996);
        Balances(runner.Health);
    }

    [Fact]
    public async Task DisposeAsync_WithAStuckRoute_EndsAndLeavesTheRestCountedAsWaiting()
    {
        var never = new TaskCompletionSource();
        var runner = Run(new ScriptedRoute((_, _) => never.Task));
        runner.Tell(Told.Change(1));
        runner.Tell(Told.Change(2));
        await Patience.UntilAsync(() => runner.Health.Waiting == 2);
        await runner.DisposeAsync().AsTask().WaitAsync(TimeSpan.FromSeconds(20), TestContext.Current.CancellationToken);
        Assert.Equal(2, runner.Health.Waiting);
    }

    [Fact]
    public async Task DisposeAsync_WithSomethingWaiting_StillTellsIt()
    {
        var route = new ScriptedRoute(async (_, _) => await Task.Delay(20, CancellationToken.None));
        var runner = new RouteRunner(route, new RouteSettings(), TimeProvider.System, NullLogger.Instance);
        runner.Tell(Told.Change(1));
        runner.Tell(Told.Change(2));
        await runner.DisposeAsync();
        Assert.Equal(2, route.Told.Count);
    }
}
