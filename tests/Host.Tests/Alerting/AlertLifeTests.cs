using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Life;
using static Lampwarden.Host.Alerting.AlertState;
using static Lampwarden.Host.Alerting.Life.AlertEvent;

namespace Lampwarden.Host.Tests.Alerting;

/// <summary>
/// Transitions as the public summaries of IEC 62682 / ISA-18.2 give them: condition true, acknowledge, return, re-occurrence,
/// latching with reset after both, shelving with an end.
/// </summary>
public sealed class AlertLifeTests
{
    [Theory]
    [InlineData(Normal, Raise, Unacknowledged)]
    [InlineData(Unacknowledged, Acknowledge, Acknowledged)]
    [InlineData(Acknowledged, Return, Normal)]
    [InlineData(Unacknowledged, Return, ReturnedUnacknowledged)]
    [InlineData(ReturnedUnacknowledged, Acknowledge, Normal)]
    [InlineData(ReturnedUnacknowledged, Raise, Unacknowledged)]
    [InlineData(Unacknowledged, Shelve, Shelved)]
    [InlineData(Acknowledged, Shelve, Shelved)]
    [InlineData(ReturnedUnacknowledged, Shelve, Shelved)]
    [InlineData(Normal, Shelve, Normal)]
    [InlineData(Normal, Acknowledge, Normal)]
    [InlineData(Acknowledged, Reset, Acknowledged)]
    [InlineData(Unacknowledged, Reset, Unacknowledged)]
    public void Next_OfAPlainAlert_FollowsTheStandard(AlertState before, AlertEvent happened, AlertState after) =>
        Assert.Equal(after, AlertLife.Next(before, happened, standing: happened is not Return, latching: false));

    [Theory]
    [InlineData(Unacknowledged, Return, LatchedUnacknowledged)]
    [InlineData(Acknowledged, Return, LatchedAcknowledged)]
    [InlineData(LatchedUnacknowledged, Acknowledge, LatchedAcknowledged)]
    [InlineData(LatchedUnacknowledged, Reset, LatchedUnacknowledged)]
    [InlineData(LatchedAcknowledged, Reset, Normal)]
    [InlineData(LatchedAcknowledged, Raise, Unacknowledged)]
    [InlineData(LatchedUnacknowledged, Raise, Unacknowledged)]
    [InlineData(Acknowledged, Reset, Acknowledged)]
    public void Next_OfALatchingAlert_NeedsClearingAcknowledgingAndReset(AlertState before, AlertEvent happened, AlertState after) =>
        Assert.Equal(after, AlertLife.Next(before, happened, standing: false, latching: true));

    [Theory]
    [InlineData(true, false, Unacknowledged)]
    [InlineData(true, true, Unacknowledged)]
    [InlineData(false, false, Normal)]
    [InlineData(false, true, LatchedUnacknowledged)]
    public void Next_LeavingTheShelf_DependsOnTheConditionAlone(bool standing, bool latching, AlertState after) =>
        Assert.Equal(after, AlertLife.Next(Shelved, Unshelve, standing, latching));

    [Fact]
    public void Next_OnTheShelf_OnlyUnshelvingMoves()
    {
        foreach (var happened in Enum.GetValues<AlertEvent>().Where(happened => happened != Unshelve))
        {
            Assert.Equal(Shelved, AlertLife.Next(Shelved, happened, true, true));
        }
    }

    [Fact]
    public void Next_AnyState_NeverLeavesANonLatchingAlertLatched()
    {
        var reached = new HashSet<AlertState> { Normal };
        for (var round = 0; round < 10; round++)
        {
            reached.UnionWith(reached.ToList().SelectMany(state => Enum.GetValues<AlertEvent>()
                .SelectMany(happened => new[] { true, false }.Select(standing => AlertLife.Next(state, happened, standing, latching: false)))));
        }

        Assert.DoesNotContain(LatchedAcknowledged, reached);
        Assert.DoesNotContain(LatchedUnacknowledged, reached);
        Assert.Equal(5, reached.Count);
    }
}
