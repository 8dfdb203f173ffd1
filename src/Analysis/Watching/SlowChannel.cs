namespace Lampwarden.Analysis.Watching;

/// <summary>What the slow channel thinks after a block.</summary>
/// <param name="Direction">+1 rising, -1 falling, 0 nothing.</param>
internal readonly record struct SlowCry(int Direction, FaultShape Shape, double OnsetSeconds, double Size, double SizeSd, double Excess, double Ratio, double Runner);

/// <summary>
/// Slow changes: blocks of ten seconds through a bank of healthy models (one for each guess of the warm-up's time constant, until one has
/// proved best), their surprises weighed for faults of every onset and shape.
/// </summary>
internal sealed class SlowChannel
{
    public const double BlockSeconds = 10;

    // The budget of false alarms is in docs/watch.md; thresholds are natural logarithms of a likelihood ratio.
    private const double RiseThreshold = 9;
    private const double FallThreshold = 20;
    private const double StepDownThreshold = 14;
    private const double LearningExtra = 8;
    private const double LeastRise = 0.004;
    private const double LeastFall = 0.012;
    private const double LeastRiseLearning = 0.03;
    private const double ArmSeconds = 2400;
    private const double ChooseSeconds = 1800;
    private const double YoungSeconds = 6300;
    private const double YoungExtra = 4;

    // How restless the ambient may be: the design figure, and two worse ones (a room kept by a thermostat) that have to prove themselves
    // by likelihood, on readings older than half an hour, so that a fault cannot pass for a restless room.
    private static readonly (double Sd, double Tau)[] Ambients = [(0.003, 3600), (0.0045, 1200), (0.008, 900)];
    private const double AmbientProof = 6, AmbientMost = 25, AmbientLag = 1800;
    private readonly double[] proof = new double[3];
    private readonly double[] laggedProof = new double[3];
    private double lagFrom = double.NaN;
    private readonly double[] pendingProof = new double[3];
    private const double HuberLimit = 3.5;

    private static readonly double[] WarmTaus = [240, 400, 600, 840, 1180, 1650, 2300, 3300];

    private readonly bool mainsMeasured;
    private readonly HealthyModel[] bank;
    private readonly FaultScores scores = new();
    private readonly Unrest unrest = new();
    private readonly Unrest falling = new();
    private int lead;
    private bool chosen;
    private double startSeconds = double.NaN;
    private double blockFrom = double.NaN;
    private double lastMiddle = double.NaN;
    private double sumLog;
    private double sumMains;
    private double leastMains;
    private double mostMains;
    private double anchor = double.NaN;
    private int count;

    public SlowChannel(bool mainsMeasured)
    {
        this.mainsMeasured = mainsMeasured;
        bank = new HealthyModel[WarmTaus.Length];
        for (var i = 0; i < bank.Length; i++)
        {
            bank[i] = new HealthyModel(mainsMeasured);
        }
    }

    public HealthyModel Model => bank[lead];

    public FaultScores Scores => scores;

    public bool Started => !double.IsNaN(lastMiddle);

    public bool Armed { get; private set; }

    /// <summary>What a healthy unit should show at a moment, ln A.</summary>
    public double Foretell(double seconds, double mains) => Model.Foretell(mains) + Model.DriftAhead(seconds - lastMiddle);

    public double AgeSeconds(double now) => now - startSeconds;

    /// <summary>Begins to learn a new level.</summary>
    public void Restart(double warmSd)
    {
        startSeconds = blockFrom = lastMiddle = anchor = double.NaN;
        sumLog = sumMains = 0;
        count = 0;
        lead = 0;
        chosen = Armed = false;
        foreach (var model in bank)
        {
            model.AssumeAmbient(Ambients[0].Sd, Ambients[0].Tau);
        }

        this.warmSd = warmSd;
        scores.Clear();
    }

    private double warmSd = 0.12;
    private double exponent = 0.6;
    private double exponentSd = 0.6;

    public void Assume(double knownExponent, double sd) => (exponent, exponentSd) = (knownExponent, sd);

    /// <summary>Adds one reading that is not in doubt; true if that closed a block.</summary>
    public bool Add(double seconds, double logAmps, double mains, double whiteSd)
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
                Close(whiteSd);
                closed = true;
            }

            blockFrom += BlockSeconds * Math.Floor((seconds - blockFrom) / BlockSeconds);
        }

        if (count == 0)
        {
            (leastMains, mostMains) = (mains, mains);
        }

        var clip = Math.Max(5 * whiteSd, 0.008);
        var value = logAmps;
        if (!double.IsNaN(anchor))
        {
            var healthy = anchor + (Model.Exponent * mains);
            value = healthy + Math.Clamp(logAmps - healthy, -clip, clip);
        }

        sumLog += value;
        sumMains += mains;
        leastMains = Math.Min(leastMains, mains);
        mostMains = Math.Max(mostMains, mains);
        count++;
        return closed;
    }

    private void Close(double whiteSd)
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
            for (var i = 0; i < bank.Length; i++)
            {
                bank[i].Start(log - (mainsMeasured ? exponent * mains : 0), 0.5, warmSd, WarmTaus[i], 0.2, exponent, exponentSd);
            }

            lastMiddle = middle;
        }

        var step = middle - lastMiddle;
        for (var i = 0; i < (chosen ? Ambients.Length : bank.Length); i++)
        {

            var model = bank[i];
            model.Advance(step);
            model.Compare(log, mains, noise);
            var tension = Math.Abs(model.Surprise) / Math.Sqrt(model.SurpriseVariance);
            if (tension > HuberLimit)
            {
                // Huber: a surprise beyond the limit counts as one at the limit.
                model.Compare(log, mains, noise + (model.SurpriseVariance * ((tension / HuberLimit) - 1)));
            }

            if (i == lead)
            {
                scores.Weigh(model, mains, blockFrom, middle);
            }

            model.Learn();
        }

        lastMiddle = middle;
        anchor = log - (Model.Exponent * mains);
        sumLog = sumMains = 0;
        count = 0;
        if (!chosen)
        {
            Choose(middle);
        }
        else
        {
            JudgeAmbient(middle);
        }

        Armed |= middle - startSeconds > ArmSeconds;
    }

    private void Choose(double seconds)
    {
        var best = lead;
        for (var i = 0; i < bank.Length; i++)
        {
            if (bank[i].LogLikelihood > bank[best].LogLikelihood + (i == best ? 0 : 0.5))
            {
                best = i;
            }
        }

        lead = best;
        if (seconds - startSeconds > ChooseSeconds)
        {
            Specialise();
        }
    }

    /// <summary>The warm-up is known well enough: the bank's places are taken by one warm-up under several ambients.</summary>
    private void Specialise()
    {
        chosen = true;
        var winner = bank[lead];
        (bank[0], bank[lead]) = (winner, bank[0]);
        lead = 0;
        for (var i = 0; i < Ambients.Length; i++)
        {
            if (i > 0)
            {
                bank[i].CopyFrom(winner);
            }

            bank[i].AssumeAmbient(Ambients[i].Sd, Ambients[i].Tau);
            bank[i].LogLikelihood = 0;
            proof[i] = laggedProof[i] = pendingProof[i] = 0;
        }

        lagFrom = double.NaN;
    }

    private void JudgeAmbient(double seconds)
    {
        for (var i = 1; i < Ambients.Length; i++)
        {
            proof[i] = Math.Clamp(proof[i] + bank[i].LogLikelihood - bank[0].LogLikelihood, -AmbientProof, AmbientMost);
            bank[i].LogLikelihood = 0;
        }

        bank[0].LogLikelihood = 0;
        if (double.IsNaN(lagFrom) || seconds - lagFrom >= AmbientLag / 2)
        {
            // Two halves of the lag: what was pending has aged by at least half of it.
            pendingProof.CopyTo(laggedProof, 0);
            proof.CopyTo(pendingProof, 0);
            lagFrom = seconds;
        }

        var (best, most) = (0, AmbientProof);
        for (var i = 1; i < Ambients.Length; i++)
        {
            // In youth there is no old proof, and no fault to hide from it either: the present one counts.
            var counts = AgeSeconds(seconds) < YoungSeconds ? proof[i] : Math.Min(laggedProof[i], pendingProof[i]);
            if (counts + (i == lead ? AmbientProof : 0) > most)
            {
                (best, most) = (i, counts + (i == lead ? AmbientProof : 0));
            }
        }

        if (best != lead)
        {
            lead = best;
            scores.Clear();
        }
    }

    /// <summary>Likeliest slow fault at the end of the block just closed; direction 0 if none is likely enough.</summary>
    public SlowCry Ask(double seconds)
    {
        var rise = Best(seconds, up: true);
        var extra = Math.Max(unrest.Extra, falling.Extra) + (!Armed ? LearningExtra : AgeSeconds(seconds) < YoungSeconds ? YoungExtra : 0);
        unrest.Observe(seconds, rise.Ratio);
        if (rise.Ratio > RiseThreshold + extra && rise.Excess > (Armed ? LeastRise : LeastRiseLearning))
        {
            return rise;
        }

        var fall = Best(seconds, up: false);
        falling.Observe(seconds, fall.Ratio);
        var threshold = fall.Shape == FaultShape.Step ? StepDownThreshold : FallThreshold;
        return fall.Ratio > threshold + extra && -fall.Excess > (Armed ? LeastFall : LeastRiseLearning) ? fall : fall with { Direction = 0 };
    }

    /// <summary>The likeliest fault of one direction, with the ratio of the best of another shape beside it.</summary>
    public SlowCry Best(double seconds, bool up)
    {
        var sign = up ? 1 : -1;
        var best = new SlowCry(sign, FaultShape.Ramp, seconds, 0, 0, 0, double.NegativeInfinity, double.NegativeInfinity);
        for (var s = 0; s < FaultScores.Shapes; s++)
        {
            var shape = (FaultShape)s;
            if (!up && shape is FaultShape.QuickGrowth or FaultShape.SlowGrowth)
            {
                continue;
            }

            var (least, most) = Limits(shape);
            var (low, high) = up ? (least, most) : (-most, -least);
            var (top, where) = (double.NegativeInfinity, -1);
            for (var c = 0; c < scores.Count; c++)
            {
                var ratio = scores.Ratio(c, shape, low, high);
                if (ratio > top)
                {
                    (top, where) = (ratio, c);
                }
            }

            if (where < 0)
            {
                continue;
            }

            if (top > best.Ratio)
            {
                var (size, sd) = scores.Size(where, shape);
                size = Math.Clamp(size, low, high);
                var excess = size * FaultScores.Unit(shape, seconds - scores.Onset(where));
                best = new SlowCry(sign, shape, scores.Onset(where), size, sd, excess, top, best.Ratio);
            }
            else if (top > best.Runner)
            {
                best = best with { Runner = top };
            }
        }

        return best;
    }

    /// <summary>Smallest and largest sizes taken for faults: ramps 0.3 to 300 % an hour, growth from 0.05 to 1 %, steps of 0.4 to 50 %.</summary>
    private static (double Least, double Most) Limits(FaultShape shape) => shape switch
    {
        FaultShape.Ramp => (0.003, 3),
        FaultShape.Step => (0.004, 0.5),
        _ => (0.0005, 0.01),
    };

    /// <summary>A change has been explained: the model goes on from the new level, and no onset before it counts.</summary>
    public void ShiftLevel(double by)
    {
        foreach (var model in bank)
        {
            model.ShiftLevel(by, 0.003 + (0.1 * Math.Abs(by)));
        }

        anchor += by;
        sumLog = sumMains = 0;
        count = 0;
        scores.Clear();
    }

    /// <summary>Forgets the readings of the open block: some of them turned out to be in doubt.</summary>
    public void DropBlock()
    {
        sumLog = sumMains = 0;
        count = 0;
    }

    public void Transfer(StateStream state)
    {
        foreach (var model in bank)
        {
            model.Transfer(state);
        }

        scores.Transfer(state);
        state.Fields(proof);
        state.Fields(laggedProof);
        state.Fields(pendingProof);
        state.Field(ref lagFrom);
        unrest.Transfer(state);
        falling.Transfer(state);
        state.Field(ref lead);
        state.Field(ref chosen);
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
