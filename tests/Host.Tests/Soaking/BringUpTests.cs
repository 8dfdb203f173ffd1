using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Tests.Web.Support;

namespace Lampwarden.Host.Tests.Soaking;

/// <summary>A bring-up followed by the current alone.</summary>
public sealed class BringUpTests
{
    private static readonly IReadOnlyList<BringUpStep> Steps =
        BringUpPlanner.Steps(BenchPlan.From(QuietPage.Bench("attic", "25 W 120 V || 60 W 120 V || 100 W 120 V", "resistor 450 ohm"), LampInventory.Empty), LampInventory.Empty);

    private readonly BringUp _bringUp = new(Steps);
    private readonly List<BringUpMove> _moves = [];
    private double _seconds;

    [Fact]
    public void Planner_ThreeLampsInParallel_AddsThemFromTheSmallest() =>
        Assert.Equal(["25 W 120 V", "25 W 120 V || 60 W 120 V", "25 W 120 V || 60 W 120 V || 100 W 120 V"], Steps.Select(step => step.Bank));

    [Fact]
    public void Planner_SeriesPart_IsNeverLeftOut()
    {
        var steps = BringUpPlanner.Steps(BenchPlan.From(QuietPage.Bench("attic", "(75 W 120 V || 25 W 120 V) + 150 W 120 V"), LampInventory.Empty), LampInventory.Empty);

        Assert.Equal(["25 W 120 V + 150 W 120 V", "(75 W 120 V || 25 W 120 V) + 150 W 120 V"], steps.Select(step => step.Bank));
    }

    [Fact]
    public void Planner_LampToWhichTheUnitIsAShort_IsNoStep()
    {
        var steps = BringUpPlanner.Steps(BenchPlan.From(QuietPage.Bench("attic", "25 W 120 V || 200 W 120 V", "resistor 60 ohm"), LampInventory.Empty), LampInventory.Empty);

        Assert.Equal(["25 W 120 V || 200 W 120 V"], steps.Select(step => step.Bank));
    }

    [Fact]
    public void Planner_EachStep_ExpectsMoreThanTheLast_AndStopsBelowADeadShort()
    {
        foreach (var step in Steps)
        {
            Assert.True(step.ExpectLowAmps < step.ExpectHighAmps && step.ExpectHighAmps < step.StopAboveAmps);
            Assert.True(step.StopAboveAmps < step.Plan.Prediction.Shorted.LineAmps);
        }

        Assert.True(Steps[0].ExpectLowAmps < Steps[1].ExpectLowAmps && Steps[1].ExpectLowAmps < Steps[2].ExpectLowAmps);
    }

    [Fact]
    public void Take_LampAfterLamp_RecognisesEachAndEnds()
    {
        Hold(Amps(0));
        Assert.Equal(("ready", 0), (_bringUp.Status.State, _bringUp.Status.At));
        Hold(Amps(1));
        Assert.Equal(("ready", 1), (_bringUp.Status.State, _bringUp.Status.At));
        Hold(Amps(2));

        Assert.True(_bringUp.Status.Over);
        Assert.Equal([Steps[1].Bank, Steps[2].Bank], _moves.Where(move => move.Announcement is not null).Select(move => move.Announcement!.Detail));
        Assert.Equal(Steps[2].Plan.WatchSettings.Expectation, _moves.Last(move => move.Announcement is not null).Announcement!.Expectation);
    }

    [Fact]
    public void Take_LampsAndUnitOfFivePercentOff_IsRecognisedAllTheSame()
    {
        Hold(Amps(0) * 1.05);
        Hold(Amps(1) * 1.05);

        Assert.Equal(1, _bringUp.Status.At);
    }

    [Fact]
    public void Take_TheLampIsAnnouncedBeforeItsReadingIsWeighed()
    {
        Hold(Amps(0));
        _moves.Clear();

        Take(Amps(1));

        Assert.NotNull(Assert.Single(_moves).Announcement);
    }

    [Fact]
    public void Take_MainsWander_IsNoLamp()
    {
        Hold(Amps(0));
        Hold(Amps(0) * 1.03);
        Hold(Amps(0) * 0.96);

        Assert.Equal(0, _bringUp.Status.At);
        Assert.DoesNotContain(_moves, move => move.Announcement is not null);
    }

    [Fact]
    public void Take_ShortInsteadOfALamp_SaysStopAndAnnouncesNothing()
    {
        Hold(Amps(0));
        var shorted = Steps[0].Plan.Prediction.Shorted.LineAmps;
        Assert.True(shorted > Steps[0].StopAboveAmps);

        Hold(Steps[^1].Plan.Prediction.Shorted.LineAmps);

        Assert.Equal("stop", _bringUp.Status.State);
        Assert.DoesNotContain(_moves, move => move.Announcement is not null);
    }

    [Fact]
    public void Take_InrushOfTheNextLamp_IsNotTakenForAShort()
    {
        Hold(Amps(0));
        Take(Steps[1].StopAboveAmps * 1.3);
        Hold(Amps(1));

        Assert.Equal(("ready", 1), (_bringUp.Status.State, _bringUp.Status.At));
    }

    [Fact]
    public void Take_FaultAtTheFirstStep_SaysStop()
    {
        Hold(Steps[0].Plan.Prediction.Shorted.LineAmps);

        Assert.Equal("stop", _bringUp.Status.State);
        Assert.Contains("mains off", _bringUp.Status.Sentence, StringComparison.Ordinal);
    }

    [Fact]
    public void Confirm_ByAPerson_TakesTheStep_AndNoMoreThanThereAre()
    {
        Hold(Amps(0));

        Assert.NotNull(_bringUp.Confirm(_seconds)?.Announcement);
        Assert.NotNull(_bringUp.Confirm(_seconds));
        Assert.Null(_bringUp.Confirm(_seconds));
    }

    private static double Amps(int step) => Steps[step].Plan.Prediction.Steady.LineAmps;

    private void Hold(double amps)
    {
        for (var reading = 0; reading < 12; reading++)
        {
            Take(amps);
        }
    }

    private void Take(double amps)
    {
        _seconds += 0.5;
        if (_bringUp.Take(new Observation(_seconds, amps)) is { } move)
        {
            _moves.Add(move);
        }
    }
}
