namespace Lampwarden.Analysis.Watching;

/// <summary>
/// One-sided cumulative sum (Page 1954): S becomes max(0, S + z - k). The alarm is the caller's, when <see cref="Sum"/> exceeds a threshold,
/// strictly. <see cref="Count"/> readings lie since the sum was last zero, so the change is likeliest to have begun that many readings ago.
/// </summary>
internal struct Cusum
{
    /// <summary>The statistic, in the unit of what is added.</summary>
    public double Sum { get; private set; }

    /// <summary>Readings since the sum was last zero.</summary>
    public int Count { get; private set; }

    /// <summary>Starts with a head start: half the threshold gives the fast initial response of Lucas and Crosier (1982).</summary>
    public void Start(double head) => (Sum, Count) = (head, 0);

    /// <summary>Adds one value less its allowance.</summary>
    public void Add(double value, double allowance)
    {
        Sum = Math.Max(0, Sum + value - allowance);
        Count = Sum > 0 ? Count + 1 : 0;
    }

    public void Transfer(StateStream state)
    {
        var (sum, count) = (Sum, Count);
        state.Field(ref sum);
        state.Field(ref count);
        (Sum, Count) = (sum, count);
    }
}
