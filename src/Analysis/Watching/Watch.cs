namespace Lampwarden.Analysis.Watching;

/// <summary>
/// A watch over one bench for one run. Give it every observation in order; it answers with what that observation changed among the findings.
/// It knows no clock and draws no random number: the same observations give the same findings, bit for bit. Not safe for use by two threads at once.
/// </summary>
public sealed partial class Watch
{
    private const int StateVersion = 8;
    private const double LeastSettleSeconds = 5;
    private const double LongGapSeconds = 30;
    private const double SlowInrushSeconds = 4, SlowInrushTimes = 8;

    private readonly WatchSettings settings;
    private readonly FindingBook book = new();
    private readonly MeterTrouble trouble;
    private readonly AbsoluteLimits limits;
    private readonly MeterNoise noise;
    private readonly MainsView mains;
    private readonly SuddenChannel sudden = new();
    private readonly Excursion excursion = new();
    private readonly LocalTrend trend = new();
    private readonly SlowChannel slow;
    private readonly StuckCode stuck;
    private readonly InrushView inrush = new();
    private Expectation? expectation;
    private Expectation? expectationBefore;
    private int stuckFinding;
    private double firstSeconds = double.NaN;
    private double lastSeconds;
    private double lastReadingSeconds = double.NaN;
    private double gapVariance;
    private double gapForgottenSeconds;
    private double announcedSeconds = double.NegativeInfinity;
    private double armedAmps = double.NaN;
    private double holdUntilSeconds = double.NegativeInfinity;
    private long readings;

    /// <summary>Prepares a watch.</summary>
    /// <exception cref="ArgumentException">A setting is outside its range.</exception>
    public Watch(WatchSettings settings)
    {
        ArgumentNullException.ThrowIfNull(settings);
        settings.Validate();
        this.settings = settings;
        expectation = settings.Expectation;
        trouble = new MeterTrouble(settings, book);
        limits = new AbsoluteLimits(book);
        noise = new MeterNoise(settings.ReadingsPerSecond);
        mains = new MainsView(settings.NominalMainsVolts);
        Notes = Advice.Limits(settings);
        slow = new SlowChannel(settings.MainsMeasured);
        stuck = new StuckCode(settings.ReadingsPerSecond);
        AssumeExponent();
    }

    /// <summary>How far the watch has come.</summary>
    public WatchPhase Phase =>
        !Settled(lastSeconds) ? WatchPhase.Settling
        : slow.Armed ? WatchPhase.Watching : WatchPhase.Learning;

    /// <summary>Every finding of the run in its latest form, oldest first.</summary>
    public IReadOnlyList<Finding> Findings => book.All;

    /// <summary>Stretches without readings, oldest first.</summary>
    public IReadOnlyList<WatchGap> Gaps => trouble.Gaps;

    /// <summary>What a user must know before the run about what this watch will not see, plain sentences; empty where all is measured and predicted.</summary>
    public IReadOnlyList<string> Notes { get; }

    /// <summary>What the watch thinks at the moment, in one plain sentence.</summary>
    public string Sentence
    {
        get
        {
            for (var i = book.All.Count - 1; i >= 0; i--)
            {
                if (book.All[i].ClearedSeconds is null)
                {
                    return book.All[i].Explanation;
                }
            }

            return Phase switch
            {
                WatchPhase.Settling => "The filaments and the unit are coming up; only the absolute limits speak yet.",
                WatchPhase.Learning => "Learning what this unit draws; sudden faults are already watched for.",
                _ => $"All is well: the unit draws {Advice.Amps(LevelAmps)}, as it should.",
            };
        }
    }

    /// <summary>Takes one observation and says what it changed; an empty list, at no cost, when nothing.</summary>
    /// <param name="o">Seconds must not decrease; an earlier time than the last is taken as the last.</param>
    public IReadOnlyList<FindingChange> Observe(in Observation o)
    {
        var observation = o.Seconds < lastSeconds ? o with { Seconds = lastSeconds } : o;
        lastSeconds = observation.Seconds;
        trouble.Observe(observation);
        if (!observation.IsGap && !observation.IsOverload)
        {
            Weigh(observation);
        }

        return book.Take();
    }

    /// <summary>Tells the watch what the user did, so that it is not mistaken for a fault.</summary>
    /// <param name="seconds">When, in seconds of the run; the present or shortly before.</param>
    /// <param name="what">What was done.</param>
    public IReadOnlyList<FindingChange> Announce(double seconds, Announcement what)
    {
        ArgumentNullException.ThrowIfNull(what);
        var old = expectation;
        inrush.Skip();
        expectationBefore = null;
        armedAmps = double.NaN;
        if (what.Expectation is not null)
        {
            expectation = what.Expectation;
        }
        else if (what.Kind == AnnouncementKind.LoadChanged && expectation is { } bench)
        {
            // Where the line will settle is not known any more; what the bank passes into a short is.
            expectation = bench with { BandLowAmps = double.NaN, BandHighAmps = double.NaN, Lamps = [] };
        }

        if (what.Kind == AnnouncementKind.CyclesByItself)
        {
            // What has been learned stays; what was found of the cycle is forgiven.
            cycle.Declared = true;
            Forgive(seconds);
            return book.Take();
        }

        announcedSeconds = seconds;
        cycle.Restart();
        firstCycleFinding = 0;
        AssumeExponent();
        excursion.End();
        sudden.Reset();
        trend.Restart();
        Forgive(seconds);
        var known = what.Kind == AnnouncementKind.LampSwitched && old is not null && what.Expectation is not null;
        if (known)
        {
            slow.ShiftLevel(Math.Log(what.Expectation!.SteadyAmps / old!.SteadyAmps));
        }
        else
        {
            Relearn(seconds, what.Kind == AnnouncementKind.LoadChanged ? LoadWarmUpSd : SwitchWarmUpSd);
        }

        return book.Take();
    }

    /// <summary>What the run says about the unit if it ends now.</summary>
    public Judgement Judge(double endSeconds) => Watching.Judge.Decide(
        settings, book.All, endSeconds, trouble.GapSeconds + trouble.OpenGapSeconds(endSeconds), readings, LevelAmps, ReferenceAmps);

    /// <summary>The whole state, to be restored after a restart without any change in later findings.</summary>
    public byte[] Save() => StateStream.Save(Transfer);

    /// <summary>A watch that goes on where <see cref="Save"/> left off.</summary>
    /// <exception cref="FormatException">The state was cut short or belongs to another version.</exception>
    public static Watch Restore(WatchSettings settings, ReadOnlySpan<byte> saved)
    {
        var watch = new Watch(settings);
        StateStream.Restore(saved, watch.Transfer);
        return watch;
    }

    private double SettleSeconds =>
        expectation is { } expected && expected.SettleSeconds > 0 ? Math.Max(LeastSettleSeconds, 3 * expected.SettleSeconds) : LeastSettleSeconds;

    private bool Settled(double seconds) => seconds - firstSeconds >= SettleSeconds;

    private double LevelAmps => slow.Started ? Math.Exp(slow.Foretell(lastSeconds, 0)) : double.NaN;

    /// <summary>What the level at the end is held against: the prediction in force, else the unit's own level when it was first armed.</summary>
    private double ReferenceAmps => expectation is { } expected ? double.IsNaN(expected.BandHighAmps) ? double.NaN : expected.SteadyAmps : armedAmps;

    private void AssumeExponent()
    {
        if (expectation is { } expected && double.IsFinite(expected.MainsExponent))
        {
            slow.Assume(expected.MainsExponent, 0.4);
        }
    }

    private void Weigh(in Observation o)
    {
        readings++;
        var seconds = o.Seconds;
        if (double.IsNaN(firstSeconds))
        {
            firstSeconds = seconds;
        }

        if (expectation is not null)
        {
            limits.Observe(seconds, o.LineAmps, MainsScale(o), Settled(seconds), expectation, Covered(o), stepFinding > 0 || book.Stands(riseFinding));
        }

        if (settings.MainsMeasured)
        {
            mains.Observe(seconds, o.MainsVolts, noise.Pole);
            WatchMains(seconds);
        }

        WatchInrush(o);
        if (!Settled(seconds) || seconds < holdUntilSeconds)
        {
            return;
        }

        if (seconds - lastReadingSeconds > 2.5 / settings.ReadingsPerSecond)
        {
            sudden.Skip();
            noise.Skip();
            if (slow.Started && seconds - lastReadingSeconds > LongGapSeconds)
            {
                // Bench and mains went on unseen: until two blocks have shown where they are now, the first readings may stand apart.
                gapVariance = slow.Model.WanderAhead(seconds - lastReadingSeconds);
                gapForgottenSeconds = seconds + (2 * SlowChannel.BlockSeconds);
            }
        }

        lastReadingSeconds = seconds;
        WeighReading(o);
        if (slow.Armed && double.IsNaN(armedAmps))
        {
            armedAmps = LevelAmps;
        }
    }

    private void Transfer(StateStream state)
    {
        var version = StateVersion;
        state.Field(ref version);
        if (version != StateVersion)
        {
            throw new FormatException($"The saved state of the watch has version {version}, expected {StateVersion}; start a new run.");
        }

        book.Transfer(state);
        trouble.Transfer(state);
        limits.Transfer(state);
        noise.Transfer(state);
        mains.Transfer(state);
        sudden.Transfer(state);
        excursion.Transfer(state);
        trend.Transfer(state);
        slow.Transfer(state);
        stuck.Transfer(state);
        inrush.Transfer(state);
        state.Field(ref stuckFinding);
        state.Field(ref firstSeconds);
        state.Field(ref lastSeconds);
        state.Field(ref lastReadingSeconds);
        state.Field(ref gapVariance);
        state.Field(ref gapForgottenSeconds);
        state.Field(ref announcedSeconds);
        state.Field(ref holdUntilSeconds);
        state.Field(ref armedAmps);
        state.Field(ref readings);
        Expectation.Transfer(state, ref expectation);
        Expectation.Transfer(state, ref expectationBefore);
        TransferSudden(state);
        TransferSlow(state);
        TransferCycle(state);
    }
}
