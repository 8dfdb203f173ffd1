namespace Lampwarden.Analysis.Watching;

public sealed partial class Watch
{
    private readonly SelfCycle cycle = new();
    private int firstCycleFinding;
    private int overdueFinding;

    /// <summary>Lets a unit of two levels switch; true if this reading belongs to the switching and is not to be weighed.</summary>
    private bool FollowCycle(in Observation o, double log)
    {
        var was = cycle.Away;
        var switching = cycle.Switches(o.Seconds, log - slow.Foretell(o.Seconds, mains.Now));
        if (cycle.Away != was)
        {
            slow.DropBlock();
            excursion.End();
            sudden.Reset();
            sudden.ForgetStrays();
            trend.Restart();
            ClearIfStanding(ref overdueFinding, o.Seconds);
        }

        if (!switching && overdueFinding == 0 && cycle.Overdue(o.Seconds))
        {
            var signature = cycle.Away && cycle.LogAway < Math.Log(Excursion.OffShare) ? Signature.OpenCircuit : Signature.OffPrediction;
            overdueFinding = book.Raise(signature, Severity.Warning, o.Seconds, o.Seconds, Advice.Overdue(cycle.Away, o.LineAmps), CycleEvidence(o));
        }

        if (switching)
        {
            noise.Skip();
            sudden.Skip();
        }

        return switching;
    }

    /// <summary>A step that stayed: the first half of what may become a cycle.</summary>
    private void RememberLeaving(double seconds, double change, int finding)
    {
        firstCycleFinding = firstCycleFinding == 0 ? finding : firstCycleFinding;
        cycle.Left(seconds, change);
    }

    /// <summary>A step was taken back. Learned while young or declared, the cycle is the unit's own way; begun later it is a finding that stands.</summary>
    private void RememberReturn(in Observation o)
    {
        if (!cycle.Returned(o.Seconds))
        {
            return;
        }

        var healthy = cycle.Declared || !slow.Armed;
        var evidence = CycleEvidence(o);
        var last = stepFinding > 0 ? stepFinding : firstCycleFinding;
        for (var number = firstCycleFinding; number > 0 && number <= last; number++)
        {
            if (IsOfCycle(book[number].Signature))
            {
                book.Amend(number, old => old with
                {
                    Signature = Signature.Cycling,
                    Severity = healthy ? Severity.Notice : Severity.Warning,
                    Explanation = Advice.CyclesItself(healthy, cycle.LongestHomeSeconds + cycle.LongestAwaySeconds),
                    Evidence = evidence,
                });
            }
        }
    }

    private static bool IsOfCycle(Signature signature) =>
        signature is Signature.HardShort or Signature.LampOut or Signature.OpenCircuit or Signature.OffPrediction or Signature.Cycling or Signature.MainsShift;

    private Dictionary<string, double> CycleEvidence(in Observation o) => new()
    {
        ["lineAmps"] = o.LineAmps,
        ["firstLevelAmps"] = Math.Exp(slow.Foretell(o.Seconds, mains.Now)),
        ["secondLevelAmps"] = Math.Exp(slow.Foretell(o.Seconds, mains.Now) + cycle.LogAway),
        ["longestFirstSeconds"] = cycle.LongestHomeSeconds,
        ["longestSecondSeconds"] = cycle.LongestAwaySeconds,
        ["periodSeconds"] = cycle.LongestHomeSeconds + cycle.LongestAwaySeconds,
    };

    private void TransferCycle(StateStream state)
    {
        cycle.Transfer(state);
        state.Field(ref firstCycleFinding);
        state.Field(ref overdueFinding);
    }
}
