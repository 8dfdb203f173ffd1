using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Life;
using Lampwarden.Host.Alerting.Routes;
using Lampwarden.Host.Tests.Alerting.Routes;
using Microsoft.Extensions.Logging.Abstractions;
using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Host.Tests.Alerting;

public sealed class AlertDispatchTests : IDisposable
{
    private readonly FakeTimeProvider _time = new(Told.Utc);
    private readonly DirectoryInfo _folder = Directory.CreateTempSubdirectory("lw-alerts-");

    public void Dispose() => _folder.Delete(recursive: true);

    private AlertDispatch Make(params (IAlertRoute Route, RouteSettings Settings)[] routes)
    {
        var dispatch = new AlertDispatch(new AlertRules(), new ServiceAlertLog(_folder.FullName), _time, NullLogger.Instance);
        dispatch.Use(turned => [.. routes.Select(route => new RouteRunner(
            route.Route, route.Settings with { LastChance = TimeSpan.FromMilliseconds(50) }, _time, NullLogger.Instance, turned))]);
        return dispatch;
    }

    private static Task TellAsync(AlertDispatch dispatch, AlertChange change) => dispatch.TellAsync(change, TestContext.Current.CancellationToken);

    [Fact]
    public async Task Tell_AWarning_SkipsARouteForCriticalOnes()
    {
        var (all, critical) = (ScriptedRoute.Working("all"), ScriptedRoute.Working("critical"));
        await using var dispatch = Make((all, new RouteSettings()), (critical, new RouteSettings { Minimum = Severity.Critical }));
        await TellAsync(dispatch, Told.Change(1, Severity.Warning));
        await TellAsync(dispatch, Told.Change(2));
        await Patience.UntilAsync(() => all.Told.Count == 2 && critical.Told.Count == 1);
        Assert.Equal(2, critical.Told[0].Alert.Number);
    }

    [Fact]
    public async Task Tell_Repeats_ReachTheNextRouteInTurn()
    {
        var routes = new[] { ScriptedRoute.Working("at-once"), ScriptedRoute.Working("first"), ScriptedRoute.Working("second") };
        await using var dispatch = Make([.. routes.Select((route, index) => ((IAlertRoute)route, new RouteSettings { AfterRepeats = index }))]);
        await TellAsync(dispatch, Told.Change());
        await TellAsync(dispatch, Told.Change(what: AlertSteps.Repeated, repeats: 1));
        await TellAsync(dispatch, Told.Change(what: AlertSteps.Repeated, repeats: 2));
        await Patience.UntilAsync(() => routes.Sum(route => route.Told.Count) == 6);
        Assert.Equal([3, 2, 1], routes.Select(route => route.Told.Count));
    }

    [Fact]
    public async Task Tell_CarriedOn_IsNewsOnlyToWhoeverKeepsTheState()
    {
        var (people, state, critical) = (ScriptedRoute.Working("people"), ScriptedRoute.Working("state"), ScriptedRoute.Working("critical"));
        await using var dispatch = Make((people, new RouteSettings()), (state, new RouteSettings { Groups = false }), (critical, new RouteSettings { Minimum = Severity.Critical }));
        await TellAsync(dispatch, Told.Change(1, Severity.Warning, what: AlertSteps.CarriedOn));
        await TellAsync(dispatch, Told.Change(1, Severity.Warning, what: AlertSteps.Returned, state: AlertState.Normal));
        await Patience.UntilAsync(() => people.Told.Count == 1 && state.Told.Count == 2);
        Assert.Equal(AlertSteps.Returned, people.Told[0].What);
        await Patience.SettleAsync();
        Assert.Empty(critical.Told);
    }

    [Fact]
    public async Task Tell_HowAnAlertGoesOn_ReachesOnlyThoseWhoHeardOfIt()
    {
        var (heard, later) = (ScriptedRoute.Working("heard"), ScriptedRoute.Working("later"));
        await using var dispatch = Make((heard, new RouteSettings()), (later, new RouteSettings { AfterRepeats = 1 }));
        await TellAsync(dispatch, Told.Change());
        await TellAsync(dispatch, Told.Change(what: AlertSteps.Acknowledged, state: AlertState.Acknowledged));
        await TellAsync(dispatch, Told.Change(what: AlertSteps.Returned, state: AlertState.Normal));
        await Patience.UntilAsync(() => heard.Told.Count == 3);
        await Patience.SettleAsync();
        Assert.Empty(later.Told);
    }

    [Fact]
    public async Task Tell_ADeadRoute_IsAnAlertOnTheOthersThatAreAlsoHandedWhatIsUntold()
    {
        var (dead, later) = (ScriptedRoute.Dead(), ScriptedRoute.Working("later"));
        await using var dispatch = Make((dead, new RouteSettings()), (later, new RouteSettings { AfterRepeats = 3 }));
        await TellAsync(dispatch, Told.Change());
        await Patience.UntilAsync(() => later.Told.Count == 2, _time);
        Assert.Equal(AlertCauses.RouteDown, later.Told[0].Alert.Cause);
        Assert.Equal(Severity.Critical, later.Told[0].Alert.Severity);
        Assert.Equal("hard-short", later.Told[1].Alert.Cause);
        // While it stays dead, the next critical alert does not wait for repeats either.
        await TellAsync(dispatch, Told.Change(7));
        await Patience.UntilAsync(() => later.Told.Any(change => change.Alert.Number == 7));
    }

    [Fact]
    public async Task Tell_ADeadRouteThatWorksAgain_ClearsItsAlert()
    {
        var broken = true;
        var flaky = new ScriptedRoute((_, _) => broken ? throw new RouteException("no answer") : Task.CompletedTask, "flaky");
        await using var dispatch = Make((flaky, new RouteSettings()));
        await TellAsync(dispatch, Told.Change());
        await Patience.UntilAsync(() => dispatch.ServiceAlerts.Count == 1, _time);
        Assert.StartsWith("'flaky' cannot tell anybody: no answer.", dispatch.ServiceAlerts.First().Text, StringComparison.Ordinal);
        broken = false;
        await Patience.UntilAsync(() => dispatch.ServiceAlerts.First().State == AlertState.ReturnedUnacknowledged, _time);
        Assert.True(dispatch.Acknowledge(1, "Kim"));
        Assert.Equal(AlertState.Normal, dispatch.ServiceAlerts.First().State);
    }

    [Fact]
    public async Task Raise_AServiceAlert_IsOnDiskBeforeARouteHearsOfIt()
    {
        var onDisk = new List<string>();
        var route = new ScriptedRoute((_, _) =>
        {
            onDisk.AddRange(File.ReadAllLines(Path.Combine(_folder.FullName, ServiceAlertLog.FileName)));
            return Task.CompletedTask;
        });
        await using var dispatch = Make((route, new RouteSettings()));
        dispatch.Raise(AlertCauses.StoreTrouble, Severity.Critical, "The disk is full.");
        await Patience.UntilAsync(() => route.Told.Count == 1);
        Assert.Contains("\"cause\":\"store-trouble\"", Assert.Single(onDisk), StringComparison.Ordinal);
    }

    [Fact]
    public async Task Raise_WhereTheDiskTakesNothing_IsToldAllTheSame()
    {
        _folder.Delete();
        var route = ScriptedRoute.Working();
        await using var dispatch = Make((route, new RouteSettings()));
        dispatch.Raise(AlertCauses.StoreTrouble, Severity.Critical, "The disk is gone.");
        await Patience.UntilAsync(() => route.Told.Count == 1);
        _folder.Create();
    }

    [Fact]
    public async Task Use_NewRoutes_LeavesTheOldOnesToFinish()
    {
        var gate = new TaskCompletionSource();
        var (old, fresh) = (new ScriptedRoute((_, _) => gate.Task, "old"), ScriptedRoute.Working("fresh"));
        await using var dispatch = Make((old, new RouteSettings()));
        await TellAsync(dispatch, Told.Change(1));
        var before = dispatch.Use(turned => [new RouteRunner(fresh, new RouteSettings(), _time, NullLogger.Instance, turned)]);
        await TellAsync(dispatch, Told.Change(2));
        gate.SetResult();
        await Task.WhenAll(before.Select(route => route.DisposeAsync().AsTask()));
        await Patience.UntilAsync(() => fresh.Told.Count == 1);
        Assert.Equal(1, Assert.Single(old.Told).Alert.Number);
        Assert.Equal(2, fresh.Told[0].Alert.Number);
    }

    [Fact]
    public async Task TryAsync_OfAWorkingAndADeadRoute_SaysWhichIsWhich()
    {
        await using var dispatch = Make((ScriptedRoute.Working("good"), new RouteSettings()), (ScriptedRoute.Dead(), new RouteSettings()));
        var trials = await dispatch.TryAsync(null, TestContext.Current.CancellationToken);
        Assert.Equal([("good", true, null), ("dead", false, "no answer")], trials.Select(trial => (trial.Route, trial.Ok, trial.Error)));
    }
}
