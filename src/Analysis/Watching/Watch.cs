namespace Lampwarden.Analysis.Watching;

/// <summary>
/// A watch over one bench for one run. Give it every observation in order; it answers with what that observation changed among the findings.
/// It knows no clock and draws no random number: the same observations give the same findings, bit for bit. Not safe for use by two threads at once.
/// </summary>
public sealed class Watch
{
    private const int StateVersion = 1;
    private const double LeastSettleSeconds = 5;
    private const double LearnSeconds = 300;
    private const double LeastSd = 0.003;

    private readonly WatchSettings settings;
    private readonly FindingBook book = new();
    private readonly MeterTrouble trouble;
    private readonly AbsoluteLimits limits;
    private readonly StepChannel steps = new();
    private readonly SlowChannel slow = new();
    private readonly LocalTrend trend = new();
    private Expectation? expectation;
    private double firstSeconds = double.NaN;
    private double lastSeconds;
    private double learnFrom = double.NaN;
    private double lastLog = double.NaN;
    private double noise = 0.003;
    private long readings;
    private int stepFinding;
    private int slowFinding;

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
    }

    /// <summary>How far the watch has come.</summary>
    public WatchPhase Phase =>
        !Settled(lastSeconds) ? WatchPhase.Settling
        : double.IsNaN(learnFrom) || lastSeconds - learnFrom < LearnSeconds ? WatchPhase.Learning
        : WatchPhase.Watching;

    /// <summary>Every finding of the run in its latest form, oldest first.</summary>
    public IReadOnlyList<Finding> Findings => book.All;

    /// <summary>Stretches without readings, oldest first.</summary>
    public IReadOnlyList<WatchGap> Gaps => trouble.Gaps;

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
                _ => $"All is well: the unit draws {Advice.Amps(Math.Exp(slow.Level))}, as it should.",
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
        if (what.Expectation is not null || what.Kind == AnnouncementKind.LoadChanged)
        {
            expectation = what.Expectation;
        }

        steps.Reset();
        slow.Restart();
        trend.Restart();
        firstSeconds = seconds;
        learnFrom = double.NaN;
        ClearIfStanding(ref stepFinding, seconds);
        ClearIfStanding(ref slowFinding, seconds);
        return book.Take();
    }

    /// <summary>What the run says about the unit if it ends now.</summary>
    public Judgement Judge(double endSeconds) => Watching.Judge.Decide(
        settings, book.All, endSeconds, trouble.GapSeconds + trouble.OpenGapSeconds(endSeconds), readings, Math.Exp(slow.Level));

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

    private void Weigh(in Observation o)
    {
        readings++;
        var seconds = o.Seconds;
        if (double.IsNaN(firstSeconds))
        {
            firstSeconds = seconds;
        }

        var scale = MainsScale(o);
        if (expectation is not null)
        {
            limits.Observe(seconds, o.LineAmps, scale, Settled(seconds), expectation);
        }

        if (!Settled(seconds))
        {
            return;
        }

        learnFrom = double.IsNaN(learnFrom) ? seconds : learnFrom;
        var floor = Math.Max(settings.Meter.CountAmps / 2, 1e-6);
        var logAmps = Math.Log(Math.Max(o.LineAmps, floor) / scale);
        LearnNoise(logAmps);
        var sd = Math.Max(noise, LeastSd);
        var stepped = !double.IsNaN(slow.Level) && WeighStep(o, logAmps, sd);
        trend.Follow(seconds, logAmps, 3 * sd);
        if (stepped)
        {
            return;
        }

        if (!steps.InDoubt)
        {
            WeighSlow(o, logAmps);
        }
    }

    private double MainsScale(in Observation o)
    {
        if (!settings.MainsMeasured || !(o.MainsVolts > 0))
        {
            return 1;
        }

        var exponent = expectation is { } expected && double.IsFinite(expected.MainsExponent) ? expected.MainsExponent : 0.6;
        return Math.Pow(o.MainsVolts / settings.NominalMainsVolts, exponent);
    }

    private void LearnNoise(double logAmps)
    {
        if (!double.IsNaN(lastLog))
        {
            var step = Math.Min(Math.Abs(logAmps - lastLog), 4 * noise);
            noise += (step * 0.886 - noise) * 0.01; // mean |difference| of two normals is 1.128 sd
        }

        lastLog = logAmps;
    }

    private bool WeighStep(in Observation o, double logAmps, double sd)
    {
        var residual = logAmps - slow.Level;
        var jump = LesserOf(residual - slow.Excess, logAmps - trend.At(o.Seconds));
        var direction = steps.Observe(o.Seconds, jump, sd);
        if (direction == 0)
        {
            return false;
        }

        var percent = (Math.Exp(residual) - 1) * 100;
        var onset = direction > 0 ? steps.OnsetUpSeconds : steps.OnsetDownSeconds;
        Dictionary<string, double> evidence = new()
        {
            ["lineAmps"] = o.LineAmps,
            ["expectedAmps"] = o.LineAmps / Math.Exp(residual),
            ["changePercent"] = percent,
        };
        steps.Reset();
        if (!limits.ShortedStands)
        {
            ClearIfStanding(ref stepFinding, o.Seconds);
            stepFinding = direction > 0
                ? book.Raise(Signature.HardShort, Severity.Critical, onset, o.Seconds, Advice.StepUp(percent, o.LineAmps), evidence)
                : percent < -90
                    ? book.Raise(Signature.OpenCircuit, Severity.Critical, onset, o.Seconds, Advice.Open(o.LineAmps), evidence)
                    : book.Raise(Signature.LampOut, Severity.Warning, onset, o.Seconds, Advice.StepDown(-percent, o.LineAmps), evidence);
        }

        slow.Restart();
        trend.Restart();
        return true;
    }

    private void WeighSlow(in Observation o, double logAmps)
    {
        var direction = slow.Observe(o.Seconds, logAmps);
        if (direction == 0 || book.Stands(slowFinding))
        {
            return;
        }

        var percent = (Math.Exp(slow.Excess) - 1) * 100;
        var perHour = slow.SlopePerHour(o.Seconds) * 100;
        Dictionary<string, double> evidence = new()
        {
            ["lineAmps"] = o.LineAmps,
            ["excessPercent"] = percent,
            ["risePercentPerHour"] = perHour,
        };
        slowFinding = direction > 0
            ? book.Raise(Signature.DevelopingShort, Severity.Critical, slow.OnsetUpSeconds, o.Seconds, Advice.Developing(percent, perHour, o.LineAmps), evidence)
            : book.Raise(Signature.OffPrediction, Severity.Notice, slow.OnsetDownSeconds, o.Seconds, Advice.FallingSlowly(-percent, o.LineAmps), evidence);
    }

    /// <summary>The smaller in size of two that agree in sign, else nothing: a jump must stand out from the level and from the trend.</summary>
    private static double LesserOf(double a, double b) => a * b <= 0 ? 0 : Math.Abs(a) < Math.Abs(b) ? a : b;

    private void ClearIfStanding(ref int number, double seconds)
    {
        if (book.Stands(number))
        {
            book.Clear(number, seconds);
        }

        number = 0;
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
        steps.Transfer(state);
        slow.Transfer(state);
        trend.Transfer(state);
        state.Field(ref firstSeconds);
        state.Field(ref lastSeconds);
        state.Field(ref learnFrom);
        state.Field(ref lastLog);
        state.Field(ref noise);
        state.Field(ref readings);
        state.Field(ref stepFinding);
        state.Field(ref slowFinding);
    }
}
