namespace Lampwarden.Analysis.Watching;

/// <summary>
/// How a healthy unit's current moves, as an extended Kalman filter over blocks of readings. In logs, so that every part is relative:
/// level + fast warm-up (its own time constant learned) + slow warm-up + exponent times mains + ambient wander. Where the mains is not
/// measured, the exponent's place is taken by a second wanderer.
/// </summary>
internal sealed class HealthyModel
{
    public const int Size = 6;
    private const int Level = 0, Warm = 1, LogTau = 2, SlowWarm = 3, Mains = 4, Ambient = 5;

    // Design figures of the nuisances (assumed, as wide as a workshop is thought to be): slow warm-up of about 1.75 h, mains wander where unmeasured.
    private const double SlowWarmSd = 0.005, SlowWarmTau = 6300;
    private const double MainsWanderSd = 0.008, MainsWanderTau = 2400;

    private readonly double[] x = new double[Size];
    private readonly double[] p = new double[Size * Size];
    private readonly double[] gain = new double[Size];
    private readonly double[] transition = new double[Size]; // the diagonal; the one off-diagonal term stands beside it
    private readonly bool mainsMeasured;
    private double warmByLogTau;
    private double ambientSd = 0.003;
    private double ambientTau = 3600;

    public HealthyModel(bool mainsMeasured) => this.mainsMeasured = mainsMeasured;

    /// <summary>Logarithm of the likelihood of all surprises so far, up to a constant.</summary>
    public double LogLikelihood;

    public double Surprise { get; private set; }

    public double SurpriseVariance { get; private set; } = 1;

    public double Exponent => mainsMeasured ? x[Mains] : 0;

    public double ExponentVariance => mainsMeasured ? p[(Mains * Size) + Mains] : 0;

    public ReadOnlySpan<double> Gain => gain;

    /// <summary>Level without warm-up still to fade, ln A.</summary>
    public double SettledLevel => x[Level];

    public double WarmUp => x[Warm] + x[SlowWarm];

    /// <summary>How well the warm-up still to come is known: sd of what it will do in the next hour, relative.</summary>
    public double WarmUpDoubt
    {
        get
        {
            var tau = Math.Exp(x[LogTau]);
            var fade = 1 - Math.Exp(-3600 / tau);
            var byTau = x[Warm] * Math.Exp(-3600 / tau) * 3600 / tau;
            return Math.Sqrt((fade * fade * p[(Warm * Size) + Warm]) + (byTau * byTau * p[(LogTau * Size) + LogTau]) - (2 * fade * byTau * p[(Warm * Size) + LogTau]));
        }
    }

    public void Start(double level, double levelSd, double warmSd, double warmTau, double tauSd, double exponent, double exponentSd)
    {
        Array.Clear(p);
        (x[Level], x[Warm], x[LogTau], x[SlowWarm], x[Mains], x[Ambient]) = (level, 0, Math.Log(warmTau), 0, mainsMeasured ? exponent : 0, 0);
        Set(Level, levelSd);
        Set(Warm, warmSd);
        Set(LogTau, tauSd);
        Set(SlowWarm, SlowWarmSd);
        Set(Mains, mainsMeasured ? exponentSd : MainsWanderSd);
        Set(Ambient, ambientSd);
        LogLikelihood = 0;
    }

    /// <summary>How restless the ambient is taken to be: 0.3 % over an hour is the design figure.</summary>
    public void AssumeAmbient(double sd, double tau) => (ambientSd, ambientTau) = (sd, tau);

    private void Set(int i, double sd) => p[(i * Size) + i] = sd * sd;

    /// <summary>Adds doubt about the level, as after a change that was explained.</summary>
    public void ShiftLevel(double by, double sd)
    {
        x[Level] += by;
        p[0] += sd * sd;
    }

    /// <summary>Says that the exponent may be off by so much here: it was learned from small moves of the mains, and holds near them.</summary>
    public void DoubtExponent(double sd) => p[(Mains * Size) + Mains] = Math.Max(p[(Mains * Size) + Mains], sd * sd);

    /// <summary>What the healthy unit should show now, ln A.</summary>
    public double Foretell(double mains) => x[Level] + x[Warm] + x[SlowWarm] + x[Ambient] + (mainsMeasured ? x[Mains] * mains : x[Mains]);

    /// <summary>Doubt about what is foretold, as a variance, mains at its nominal value.</summary>
    public double ForetoldVariance => SurpriseVariance - NoiseVariance;

    /// <summary>Noise variance of the block last compared.</summary>
    public double NoiseVariance { get; private set; }

    /// <summary>How the warm-up moves between the last block and a moment after it, relative.</summary>
    public double DriftAhead(double seconds) => x[Warm] * (Math.Exp(-seconds * Math.Exp(-x[LogTau])) - 1);

    /// <summary>What wander adds to the doubt about the foretold in a time without readings, as a variance.</summary>
    public double WanderAhead(double seconds)
    {
        var ambient = ambientSd * ambientSd * (1 - Math.Exp(-2 * seconds / ambientTau));
        return mainsMeasured ? ambient : ambient + (MainsWanderSd * MainsWanderSd * (1 - Math.Exp(-2 * seconds / MainsWanderTau)));
    }

    /// <summary>Carries the state over a time step.</summary>
    public void Advance(double seconds)
    {
        var tau = Math.Exp(x[LogTau]);
        var fade = Math.Exp(-seconds / tau);
        var slowFade = Math.Exp(-seconds / SlowWarmTau);
        var keep = Math.Exp(-seconds / ambientTau);
        var mainsKeep = mainsMeasured ? 1 : Math.Exp(-seconds / MainsWanderTau);
        warmByLogTau = x[Warm] * fade * seconds / tau;
        (transition[Level], transition[Warm], transition[LogTau]) = (1, fade, 1);
        (transition[SlowWarm], transition[Mains], transition[Ambient]) = (slowFade, mainsKeep, keep);
        x[Warm] *= fade;
        x[SlowWarm] *= slowFade;
        x[Mains] *= mainsKeep;
        x[Ambient] *= keep;

        // P <- F P F', F diagonal but for d(warm)/d(log tau).
        for (var j = 0; j < Size; j++)
        {
            p[(Warm * Size) + j] = (fade * p[(Warm * Size) + j]) + (warmByLogTau * p[(LogTau * Size) + j]);
            p[(SlowWarm * Size) + j] *= slowFade;
            p[(Mains * Size) + j] *= mainsKeep;
            p[(Ambient * Size) + j] *= keep;
        }

        for (var i = 0; i < Size; i++)
        {
            p[(i * Size) + Warm] = (fade * p[(i * Size) + Warm]) + (warmByLogTau * p[(i * Size) + LogTau]);
            p[(i * Size) + SlowWarm] *= slowFade;
            p[(i * Size) + Mains] *= mainsKeep;
            p[(i * Size) + Ambient] *= keep;
        }

        p[(Ambient * Size) + Ambient] += ambientSd * ambientSd * (1 - (keep * keep));
        if (mainsMeasured)
        {
            p[(Mains * Size) + Mains] += 1e-4 * seconds / 3600; // the exponent may wander by 0.01 in an hour
        }
        else
        {
            p[(Mains * Size) + Mains] += MainsWanderSd * MainsWanderSd * (1 - (mainsKeep * mainsKeep));
        }

        // No unit warms by exact exponentials: half a per cent of what is left, each time constant.
        p[(Warm * Size) + Warm] += Math.Pow(0.01 * x[Warm], 2) * seconds / tau;
    }

    /// <summary>Compares with a block: sets the surprise and its variance.</summary>
    /// <param name="mainsVariance">Of the measured mains: its noise reaches the foretold through the exponent.</param>
    public void Compare(double value, double mains, double noiseVariance, double mainsVariance)
    {
        Surprise = value - Foretell(mains);
        noiseVariance += mainsMeasured ? x[Mains] * x[Mains] * mainsVariance : 0;
        var variance = noiseVariance;
        for (var i = 0; i < Size; i++)
        {
            gain[i] = 0;
            for (var j = 0; j < Size; j++)
            {
                gain[i] += p[(i * Size) + j] * Weight(j, mains);
            }

            variance += Weight(i, mains) * gain[i];
        }

        SurpriseVariance = variance;
        NoiseVariance = noiseVariance;
        for (var i = 0; i < Size; i++)
        {
            gain[i] /= variance;
        }
    }

    /// <summary>Learns from the block last compared.</summary>
    public void Learn()
    {
        for (var i = 0; i < Size; i++)
        {
            x[i] += gain[i] * Surprise;
            for (var j = 0; j <= i; j++)
            {
                var lessened = p[(i * Size) + j] - (gain[i] * gain[j] * SurpriseVariance);
                p[(i * Size) + j] = p[(j * Size) + i] = lessened;
            }
        }

        x[LogTau] = Math.Clamp(x[LogTau], Math.Log(60), Math.Log(7200));
        LogLikelihood -= 0.5 * ((Surprise * Surprise / SurpriseVariance) + Math.Log(SurpriseVariance));
    }

    /// <summary>What a disturbance that has moved the state by <paramref name="shift"/> still adds to the foretold value.</summary>
    public double Seen(ReadOnlySpan<float> shift, double mains)
    {
        var sum = 0.0;
        for (var i = 0; i < Size; i++)
        {
            sum += Weight(i, mains) * shift[i];
        }

        return sum;
    }

    /// <summary>How a disturbance moves the state, through the step last made: learned share of <paramref name="left"/>, then carried.</summary>
    public void Absorb(Span<float> shift, double left)
    {
        for (var i = 0; i < Size; i++)
        {
            shift[i] += (float)(gain[i] * left);
        }
    }

    /// <summary>Carries a disturbance's shift of the state over the time step last made by <see cref="Advance"/>.</summary>
    public void Carry(Span<float> shift)
    {
        shift[Warm] = (float)((transition[Warm] * shift[Warm]) + (warmByLogTau * shift[LogTau]));
        shift[SlowWarm] *= (float)transition[SlowWarm];
        shift[Mains] *= (float)transition[Mains];
        shift[Ambient] *= (float)transition[Ambient];
    }

    private double Weight(int i, double mains) => i == LogTau ? 0 : i == Mains && mainsMeasured ? mains : 1;

    public void CopyFrom(HealthyModel other)
    {
        other.x.CopyTo(x, 0);
        other.p.CopyTo(p, 0);
        LogLikelihood = other.LogLikelihood;
        (ambientSd, ambientTau) = (other.ambientSd, other.ambientTau);
    }

    public void Transfer(StateStream state)
    {
        state.Fields(x);
        state.Fields(p);
        state.Fields(gain);
        state.Fields(transition);
        state.Field(ref warmByLogTau);
        state.Field(ref ambientSd);
        state.Field(ref ambientTau);
        state.Field(ref LogLikelihood);
        var (surprise, variance) = (Surprise, SurpriseVariance);
        state.Field(ref surprise);
        state.Field(ref variance);
        (Surprise, SurpriseVariance) = (surprise, variance);
        var noise = NoiseVariance;
        state.Field(ref noise);
        NoiseVariance = noise;
    }
}
