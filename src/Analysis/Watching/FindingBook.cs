namespace Lampwarden.Analysis.Watching;

/// <summary>All findings of a run, and what the present observation changed among them.</summary>
internal sealed class FindingBook
{
    private static readonly FindingChange[] Nothing = [];
    private readonly List<Finding> findings = [];
    private readonly List<FindingChange> changes = [];

    public IReadOnlyList<Finding> All => findings;

    /// <summary>Writes down a new finding and returns its number.</summary>
    public int Raise(Signature signature, Severity severity, double onset, double now, string explanation, Dictionary<string, double> evidence)
    {
        var finding = new Finding(findings.Count + 1, signature, severity, Math.Min(onset, now), now, null, explanation, evidence);
        findings.Add(finding);
        changes.Add(new FindingChange(ChangeKind.Raised, finding));
        return finding.Number;
    }

    /// <summary>Betters a finding; says nothing if nothing is new.</summary>
    public void Amend(int number, Func<Finding, Finding> better)
    {
        var old = findings[number - 1];
        var amended = better(old) with { Number = number };
        if (amended != old)
        {
            findings[number - 1] = amended;
            changes.Add(new FindingChange(ChangeKind.Amended, amended));
        }
    }

    /// <summary>Says that what was found is over; a finding is cleared once.</summary>
    public void Clear(int number, double now)
    {
        if (findings[number - 1].ClearedSeconds is null)
        {
            findings[number - 1] = findings[number - 1] with { ClearedSeconds = now };
            changes.Add(new FindingChange(ChangeKind.Cleared, findings[number - 1]));
        }
    }

    public bool Stands(int number) => number > 0 && findings[number - 1].ClearedSeconds is null;

    public Finding this[int number] => findings[number - 1];

    /// <summary>The changes since the last call; allocates only where there are any.</summary>
    public IReadOnlyList<FindingChange> Take()
    {
        if (changes.Count == 0)
        {
            return Nothing;
        }

        var taken = changes.ToArray();
        changes.Clear();
        return taken;
    }

    public void Transfer(StateStream state)
    {
        var count = findings.Count;
        state.Field(ref count);
        for (var i = 0; i < count; i++)
        {
            var finding = state.Reading ? Read(state) : Write(state, findings[i]);
            if (state.Reading)
            {
                findings.Add(finding);
            }
        }
    }

    private static Finding Read(StateStream state) =>
        Write(state, new Finding(0, default, default, 0, 0, null, "", new Dictionary<string, double>()));

    private static Finding Write(StateStream state, Finding finding)
    {
        var (number, signature, severity, onset, raised, cleared, explanation, evidence) = finding;
        var clearedOrNaN = cleared ?? double.NaN;
        state.Field(ref number);
        state.Field(ref signature);
        state.Field(ref severity);
        state.Field(ref onset);
        state.Field(ref raised);
        state.Field(ref clearedOrNaN);
        state.Field(ref explanation);
        var keys = evidence.Keys.ToArray();
        var count = keys.Length;
        state.Field(ref count);
        var copy = new Dictionary<string, double>();
        for (var i = 0; i < count; i++)
        {
            var key = i < keys.Length ? keys[i] : "";
            var value = i < keys.Length ? evidence[key] : 0;
            state.Field(ref key);
            state.Field(ref value);
            copy[key] = value;
        }

        return new Finding(number, signature, severity, onset, raised, double.IsNaN(clearedOrNaN) ? null : clearedOrNaN, explanation, copy);
    }
}
