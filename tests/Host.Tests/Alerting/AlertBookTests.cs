using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Life;

namespace Lampwarden.Host.Tests.Alerting;

public sealed class AlertBookTests
{
    private readonly AlertBook _book = new("bay-3", new AlertRules { OffDelaySeconds = 60 });

    internal static FindingChange Change(ChangeKind kind, int number, Signature signature = Signature.SlowInrush, Severity severity = Severity.Warning) =>
        new(kind, new Finding(number, signature, severity, 0, 0, null, $"finding {number}", new Dictionary<string, double>()));

    [Fact]
    public void Take_ANotice_AsksNobody() =>
        Assert.Null(_book.Take(Change(ChangeKind.Raised, 1, severity: Severity.Notice), 1));

    [Fact]
    public void Take_AWarning_RaisesItUnacknowledged()
    {
        var change = _book.Take(Change(ChangeKind.Raised, 4), 12.5)!;
        Assert.Equal((12.5, "raised", "slow-inrush", 1, AlertState.Unacknowledged), (change.Seconds, change.What, change.Alert.Cause, change.Alert.Number, change.Alert.State));
        Assert.Equal(4, change.Alert.FindingNumber);
    }

    [Fact]
    public void Take_ANoticeGrownToAWarning_RaisesIt()
    {
        _book.Take(Change(ChangeKind.Raised, 1, severity: Severity.Notice), 1);
        Assert.Equal("raised", _book.Take(Change(ChangeKind.Amended, 1), 2)!.What);
    }

    [Fact]
    public void Tick_AfterTheOffDelay_ReturnsIt()
    {
        _book.Take(Change(ChangeKind.Raised, 1), 0);
        Assert.Null(_book.Take(Change(ChangeKind.Cleared, 1), 10));
        Assert.Empty(_book.Tick(69.9));
        var change = Assert.Single(_book.Tick(70));
        Assert.Equal(("returned", AlertState.ReturnedUnacknowledged), (change.What, change.Alert.State));
    }

    [Fact]
    public void Take_BackWithinTheOffDelay_TellsNobodyAgain()
    {
        _book.Take(Change(ChangeKind.Raised, 1), 0);
        _book.Take(Change(ChangeKind.Cleared, 1), 10);
        Assert.Null(_book.Take(Change(ChangeKind.Raised, 2), 30));
        Assert.Empty(_book.Tick(200));
        Assert.Equal(2, Assert.Single(_book.Alerts).FindingNumber);
    }

    [Fact]
    public void Take_BackAfterItReturned_IsTheSameAlertAndMustBeAcknowledgedAgain()
    {
        _book.Take(Change(ChangeKind.Raised, 1), 0);
        _book.Take(Change(ChangeKind.Cleared, 1), 10);
        _book.Tick(70);
        var again = _book.Take(Change(ChangeKind.Raised, 2), 100)!;
        Assert.Equal(("raised", 1, AlertState.Unacknowledged), (again.What, again.Alert.Number, again.Alert.State));
    }

    [Fact]
    public void Take_TwoOfOneCauseAtOnce_AreTwoAlerts()
    {
        _book.Take(Change(ChangeKind.Raised, 1, Signature.LampOut), 0);
        _book.Take(Change(ChangeKind.Raised, 2, Signature.LampOut), 5);
        Assert.Equal([1, 2], _book.Alerts.Select(alert => alert.Number));
    }

    [Fact]
    public void Take_AWarningWithAnOnDelay_WaitsAndACriticalOneDoesNot()
    {
        var book = new AlertBook("bay-3", new AlertRules { OnDelaySeconds = 5 });
        Assert.Null(book.Take(Change(ChangeKind.Raised, 1), 0));
        Assert.Empty(book.Alerts);
        Assert.Equal("raised", book.Take(Change(ChangeKind.Raised, 2, Signature.HardShort, Severity.Critical), 1)!.What);
        Assert.Equal("raised", Assert.Single(book.Tick(5)).What);
    }

    [Fact]
    public void Take_AFleetingWarning_IsNeverRaised()
    {
        var book = new AlertBook("bay-3", new AlertRules { OnDelaySeconds = 5 });
        book.Take(Change(ChangeKind.Raised, 1), 0);
        book.Take(Change(ChangeKind.Cleared, 1), 4);
        Assert.Empty(book.Tick(100));
        Assert.Empty(book.Alerts);
    }

    [Fact]
    public void Take_APendingWarningGrownCritical_IsRaisedAtOnce()
    {
        var book = new AlertBook("bay-3", new AlertRules { OnDelaySeconds = 60 });
        book.Take(Change(ChangeKind.Raised, 1), 0);
        Assert.Equal("raised", book.Take(Change(ChangeKind.Amended, 1, Signature.HardShort, Severity.Critical), 1)!.What);
    }

    [Fact]
    public void Take_GrownWorseAfterAcknowledging_MustBeAcknowledgedAgain()
    {
        _book.Take(Change(ChangeKind.Raised, 1), 0);
        _book.Acknowledge(1, 1, "Kim");
        var worse = _book.Take(Change(ChangeKind.Amended, 1, Signature.HardShort, Severity.Critical), 2)!;
        Assert.Equal(("amended", AlertState.Unacknowledged, "hard-short"), (worse.What, worse.Alert.State, worse.Alert.Cause));
    }

    [Fact]
    public void Take_TheSameAgain_TellsNothing()
    {
        _book.Take(Change(ChangeKind.Raised, 1), 0);
        Assert.Null(_book.Take(Change(ChangeKind.Amended, 1), 2));
    }

    [Fact]
    public void Reset_OfALatchedAlert_NeedsClearingAndAcknowledgingFirst()
    {
        _book.Take(Change(ChangeKind.Raised, 1, Signature.HardShort, Severity.Critical), 0);
        Assert.Null(_book.Reset(1, 1));
        _book.Take(Change(ChangeKind.Cleared, 1), 2);
        Assert.Equal(AlertState.LatchedUnacknowledged, Assert.Single(_book.Tick(62)).Alert.State);
        Assert.Null(_book.Reset(1, 63));
        Assert.Equal(AlertState.LatchedAcknowledged, _book.Acknowledge(1, 64, "Kim")!.Alert.State);
        var reset = _book.Reset(1, 65, "Kim", "unit replaced")!;
        Assert.Equal((AlertState.Normal, "Kim", "unit replaced"), (reset.Alert.State, reset.By, reset.Reason));
    }

    [Fact]
    public void Shelve_ForAnHour_ComesBackByItself()
    {
        _book.Take(Change(ChangeKind.Raised, 1), 0);
        Assert.Equal(3610, _book.Shelve(1, 3600, 10, "Kim", "waiting for a part")!.Alert.ShelvedUntilSeconds);
        Assert.Empty(_book.Tick(3609));
        var back = Assert.Single(_book.Tick(3610));
        Assert.Equal(("unshelved", AlertState.Unacknowledged), (back.What, back.Alert.State));
    }

    [Theory]
    [InlineData(1e9)]
    [InlineData(double.PositiveInfinity)]
    public void Shelve_ForEver_IsCutToTheLongestShelf(double forSeconds)
    {
        _book.Take(Change(ChangeKind.Raised, 1), 0);
        Assert.Equal(8 * 3600, _book.Shelve(1, forSeconds, 0)!.Alert.ShelvedUntilSeconds);
    }

    [Theory]
    [InlineData(0.0)]
    [InlineData(-1.0)]
    [InlineData(double.NaN)]
    public void Shelve_ForNoTime_DoesNothing(double forSeconds)
    {
        _book.Take(Change(ChangeKind.Raised, 1), 0);
        Assert.Null(_book.Shelve(1, forSeconds, 0));
    }

    [Fact]
    public void Take_GrownWorseOnTheShelf_LeavesItAtOnce()
    {
        _book.Take(Change(ChangeKind.Raised, 1), 0);
        _book.Shelve(1, 3600, 1);
        var worse = _book.Take(Change(ChangeKind.Amended, 1, Signature.Runaway, Severity.Critical), 2)!;
        Assert.Equal((AlertState.Unacknowledged, null), (worse.Alert.State, worse.Alert.ShelvedUntilSeconds));
    }

    [Fact]
    public void Tick_CriticalAndUnacknowledged_RepeatsWithGrowingSpacing()
    {
        _book.Take(Change(ChangeKind.Raised, 1, Signature.HardShort, Severity.Critical), 0);
        var repeats = new List<double>();
        for (var second = 1; second <= 20000; second++)
        {
            repeats.AddRange(_book.Tick(second).Where(change => change.What == "repeated").Select(change => change.Seconds));
        }

        // 5, 10, 20, 40 minutes, then every hour.
        Assert.Equal([300, 900, 2100, 4500, 8100, 11700, 15300, 18900], repeats);
        _book.Acknowledge(1, 20001);
        Assert.Empty(_book.Tick(1e6));
    }

    [Fact]
    public void Tick_AWarning_IsNotRepeated()
    {
        _book.Take(Change(ChangeKind.Raised, 1), 0);
        Assert.Empty(_book.Tick(1e6));
    }

    [Fact]
    public void Take_ThreeRaisesInAMinute_IsReportedAsChatteringOnce()
    {
        for (var number = 1; number <= 6; number++)
        {
            _book.Take(Change(ChangeKind.Raised, number), number * 10);
            _book.Take(Change(ChangeKind.Cleared, number), (number * 10) + 5);
        }

        var told = _book.Tick(66);
        Assert.Equal("chattering", Assert.Single(told).Alert.Cause);
        Assert.Contains("'slow-inrush'", told[0].Alert.Text, StringComparison.Ordinal);
        // Quiet for ten minutes, and then its own off-delay.
        Assert.DoesNotContain(_book.Tick(659), change => change.Alert.Cause == "chattering");
        _book.Tick(661);
        Assert.Contains(_book.Tick(722), change => change is { What: "returned", Alert.Cause: "chattering" });
    }

    [Fact]
    public void Take_TwoRaisesInAMinute_IsNoChattering()
    {
        foreach (var at in new[] { 0.0, 30, 60.1, 90.2 })
        {
            _book.Take(Change(ChangeKind.Raised, (int)at + 1), at);
            _book.Take(Change(ChangeKind.Cleared, (int)at + 1), at + 1);
        }

        Assert.DoesNotContain(_book.Tick(91), change => change.Alert.Cause == "chattering");
    }

    [Fact]
    public void Raise_TwoSubjectsOfOneCause_AreClearedEachAlone()
    {
        var book = new AlertBook(Alert.ServiceBench, new AlertRules { OffDelaySeconds = 0 });
        book.Raise(AlertCauses.RouteDown, Severity.Warning, "'mail' is down", 0);
        book.Raise(AlertCauses.RouteDown, Severity.Warning, "'phone' is down", 1);
        Assert.Null(book.Raise(AlertCauses.RouteDown, Severity.Warning, "'mail' is down", 2));
        Assert.Equal("'phone' is down", book.Clear(AlertCauses.RouteDown, 3, "'phone'")!.Alert.Text);
        Assert.Equal(2, book.Alerts.Count);
    }

    [Fact]
    public void TakeOver_OfACarriedOnRun_KeepsWhatStandsAndReturnsWhatIsGone()
    {
        var (stays, goes) = (Change(ChangeKind.Raised, 1, Signature.HardShort, Severity.Critical), Change(ChangeKind.Raised, 2));
        _book.Take(stays, 100);
        _book.Take(goes, 110);
        _book.Acknowledge(2, 120, "Kim");
        var next = new AlertBook("bay-3");
        next.TakeOver(_book.Alerts, [stays.Finding, goes.Finding with { ClearedSeconds = 130 }], 500);
        Assert.Null(next.Take(stays with { Kind = ChangeKind.Amended }, 510));
        Assert.Equal((2, "returned", AlertState.Normal), Assert.Single(next.Tick(560)) is var gone ? (gone.Alert.Number, gone.What, gone.Alert.State) : default);
        Assert.Equal(1, Assert.Single(next.Tick(800)).Alert.Repeats);
        Assert.Equal(3, next.Take(Change(ChangeKind.Raised, 3, Signature.LampOut), 900)!.Alert.Number);
    }

    [Fact]
    public void CloseAll_WhateverIsOpen_IsClosedAndNeverToldAgain()
    {
        var book = new AlertBook("bay-3", new AlertRules { OnDelaySeconds = 30 });
        book.Take(Change(ChangeKind.Raised, 1, Signature.HardShort, Severity.Critical), 100);
        book.Take(Change(ChangeKind.Raised, 2, Signature.OpenCircuit, Severity.Critical), 110);
        book.Take(Change(ChangeKind.Raised, 3), 120);
        book.Acknowledge(2, 125, "Kim");
        Assert.Equal([(1, "closed"), (2, "closed")], book.CloseAll(130).Select(change => (change.Alert.Number, change.What)));
        Assert.DoesNotContain(book.Alerts, alert => alert.IsOpen);
        Assert.Empty(book.Tick(10_000));
        Assert.Empty(book.CloseAll(10_001));
    }
}
