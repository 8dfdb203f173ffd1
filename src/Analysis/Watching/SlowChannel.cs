namespace Lampwarden.Analysis.Watching;

/// <summary>
/// Slow changes: means over ten seconds through a bank of healthy models, their surprises weighed for faults of every onset and shape.
/// </summary>
internal sealed class SlowChannel
{
    public const double BlockSeconds = 10;
    private const double ArmSeconds = 2400;
    private const double YoungSeconds = 9000;
    private const double LearningExtra = 8;
    private const double YoungExtra = 4;
    private const double LearningExcess = 0.03;

    // How far the exponent may lie from what small moves of the mains have taught, where it has moved far (assumed). The mains meter's noise
    // makes a learned exponent too small (errors in variables), by half and more where the mains hardly moves. Giving back what the noise
    // takes was tried, and feeds on itself.
    public const double FarExponentSd = 0.5;

    private readonly bool mainsMeasured;
    private readonly HealthyBank bank;
    private readonly FaultScores scores = new();
    private readonly Suspicions suspicions;
    private double startSeconds = double.NaN;
    private double blockFrom = double.NaN;
    private double lastMiddle = double.NaN;
    private double sumLog;
    private double sumMains;
    private double leastMains;
    private double mostMains;
    private double anchor = double.NaN;
    private int count;
    private double warmSd = 0.12;
    private double exponent = 0.6;
    private double exponentSd = 0.6;

    public SlowChannel(bool mainsMeasured)
    {
        this.mainsMeasured = mainsMeasured;
        bank = new HealthyBank(mainsMeasured);
        suspicions = new Suspicions(scores, mainsMeasured);
    }

    public HealthyModel Model => bank.Lead;

    public bool Started => !double.IsNaN(lastMiddle);

    public bool Armed { get; private set; }

    /// <summary>What a healthy unit should show at a moment, ln A.</summary>
    public double Foretell(double seconds, double mains) => Model.Foretell(mains) + Model.DriftAhead(seconds - lastMiddle);

    public double AgeSeconds(double now) => now - startSeconds;

    public void Assume(double knownExponent, double sd) => (exponent, exponentSd) = (knownExponent, sd);

    /// <summary>Begins to learn a new level.</summary>
    public void Restart(double warmUpSd)
    {
        startSeconds = blockFrom = lastMiddle = anchor = double.NaN;
        DropBlock();
        Armed = false;
        warmSd = warmUpSd;
        ClearScores();
    }

    /// <summary>Adds one reading that is not in doubt; true if that closed a block.</summary>
    /// <param name="mainsNoise">Variance of the mains meter's noise in one reading, relative.</param>
    public bool Add(double seconds, double logAmps, double mains, double whiteSd, double mainsNoise)
    {
        var closed = false;
        if (double.IsNaN(blockFrom))
        {
            blockFrom = startSeconds = seconds;
        }

        if (seconds - blockFrom >= BlockSeconds)
        {
            if (count > 0)
            {
                Close(whiteSd, mainsNoise);
                closed = true;
            }

            blockFrom += BlockSeconds * Math.Floor((seconds - blockFrom) / BlockSeconds);
        }

        if (count == 0)
        {
            (leastMains, mostMains) = (mains, mains);
        }

        sumLog += Clip(logAmps, mains, whiteSd);
        sumMains += mains;
        leastMains = Math.Min(leastMains, mains);
        mostMains = Math.Max(mostMains, mains);
        count++;
        return closed;
    }

    /// <summary>A reading pulls a block's mean by no more than some sd away from the block before.</summary>
    private double Clip(double logAmps, double mains, double whiteSd)
    {
        if (double.IsNaN(anchor))
        {
            return logAmps;
        }

        var clip = Math.Max(5 * whiteSd, 0.008);
        var healthy = anchor + (Model.Exponent * mains);
        return healthy + Math.Clamp(logAmps - healthy, -clip, clip);
    }

    private void Close(double whiteSd, double mainsNoise)
    {
        var (log, mains) = (sumLog / count, sumMains / count);
        var middle = blockFrom + (BlockSeconds / 2);
        var swing = mostMains - leastMains;
        var noise = (whiteSd * whiteSd / count) + 4e-8 + Math.Pow(0.1 * Math.Max(0, swing - 0.004), 2);
        if (!mainsMeasured)
        {
            noise += 2.5e-7; // flicker of 0.08 % over 4 s, averaged over the block, times an exponent near one
        }

        if (double.IsNaN(lastMiddle))
        {
            bank.Start(log - (mainsMeasured ? exponent * mains : 0), warmSd, exponent, exponentSd);
            lastMiddle = middle;
        }

        bank.Compare(middle - lastMiddle, log, mains, noise, mainsNoise / count);
        scores.Weigh(Model, mains, blockFrom, middle);
        if (bank.Learn(middle, middle - startSeconds, middle - startSeconds < YoungSeconds))
        {
            ClearScores();
        }

        lastMiddle = middle;
        anchor = log - (Model.Exponent * mains);
        DropBlock();
        Armed |= middle - startSeconds > ArmSeconds;
    }

    /// <summary>Likeliest slow fault at the end of the block just closed; direction 0 if none is likely enough.</summary>
    public SlowCry Ask(double seconds)
    {
        var extra = !Armed ? LearningExtra : AgeSeconds(seconds) < YoungSeconds ? YoungExtra : 0;
        var cry = suspicions.Ask(seconds, extra, Armed ? 0 : LearningExcess);
        if (cry.Direction == 0 && suspicions.Tap() is not 0 and var tap)
        {
            ShiftLevel(tap);
        }

        return cry;
    }

    /// <summary>The likeliest fault of one direction, cried or not.</summary>
    public SlowCry Best(double seconds, int sign) => suspicions.Best(seconds, sign);

    /// <summary>When the excess will reach a target, from all rising faults that the readings still allow.</summary>
    public Forecast ForetellExcess(double seconds, double target) => Forecast.Of(scores, seconds, target);

    /// <summary>What so far a move of the mains does to the current is to be learned from the next readings, unclipped.</summary>
    public void LearnFarMains()
    {
        DropBlock();
        anchor = double.NaN;
        bank.DoubtExponent(FarExponentSd);
    }

    /// <summary>A change has been explained: the model goes on from the new level, and no onset before it counts.</summary>
    public void ShiftLevel(double by)
    {
        bank.ShiftLevel(by);
        anchor += by;
        DropBlock();
        ClearScores();
    }

    /// <summary>Forgets the readings of the open block: some of them turned out to be in doubt.</summary>
    public void DropBlock()
    {
        sumLog = sumMains = 0;
        count = 0;
    }

    private void ClearScores()
    {
        scores.Clear();
        suspicions.Forget();
    }

    public void Transfer(StateStream state)
    {
        bank.Transfer(state);
        scores.Transfer(state);
        suspicions.Transfer(state);
        state.Field(ref startSeconds);
        state.Field(ref blockFrom);
        state.Field(ref lastMiddle);
        state.Field(ref sumLog);
        state.Field(ref sumMains);
        state.Field(ref leastMains);
        state.Field(ref mostMains);
        state.Field(ref anchor);
        state.Field(ref count);
        state.Field(ref warmSd);
        state.Field(ref exponent);
        state.Field(ref exponentSd);
        var armed = Armed;
        state.Field(ref armed);
        Armed = armed;
    }
}
