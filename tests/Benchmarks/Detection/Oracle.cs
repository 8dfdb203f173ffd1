namespace Lampwarden.Benchmarks.Detection;

/// <summary>
/// How soon the fault could be known by one who knows everything but its moment: Shiryaev-Roberts with the true signature, exponent,
/// warm-up, noise and ambient of that very run, spared sags, taps and garbled readings. Threshold: 1,000 h of decisions, so that the mean
/// time to a false alarm is at least that by the martingale property (Pollak 1985), without tuning.
/// The cautious oracle must assume the most restless ambient of the corpus for every run, as a watch must.
/// </summary>
public sealed class Oracle(bool cautious, bool mainsMeasured)
{
    private const double BlockSeconds = 10;
    private const double ArmSeconds = 3600;
    private const double FalseAlarmHours = 1000;
    private const double HopelessLog = -30;

    /// <summary>Delay from onset to alarm in seconds; infinite if missed within the horizon; NaN where no oracle is defined or it cried before the onset.</summary>
    public double Delay(CorpusRun clean)
    {
        ArgumentNullException.ThrowIfNull(clean);
        return clean.Fault.Kind switch
        {
            FaultKind.Creep or FaultKind.Runaway => Slow(clean),
            FaultKind.Short or FaultKind.Lamp or FaultKind.Open when mainsMeasured => Sudden(clean),
            FaultKind.Short or FaultKind.Lamp or FaultKind.Open => Slow(clean),
            FaultKind.Arcing when mainsMeasured => Sudden(clean),
            _ => double.NaN,
        };
    }

    private (double Sd, double Tau) Ambient(RunTruth truth) => cautious ? (0.003, 3600) : (truth.AmbientSd, truth.AmbientTau);

    private double Slow(CorpusRun run)
    {
        var truth = run.Truth;
        var perBlock = (int)(BlockSeconds * run.Rate);
        var blocks = run.Count / perBlock;
        var (sd, tau) = Ambient(truth);
        var round = truth.CountAmps / truth.SteadyAmps;
        var noise = ((truth.NoiseSd * truth.NoiseSd) + (round * round / 12)) / perBlock;
        var mainsVariance = 0.0;
        if (mainsMeasured)
        {
            noise += truth.Gamma * truth.Gamma * ((0.0005 * 0.0005) + (0.1 / 120 * (0.1 / 120) / 12)) / perBlock;
        }
        else
        {
            noise += Math.Pow(truth.Gamma * 0.0008, 2) * 0.506; // ten-second mean of an AR(1) of 4 s
            mainsVariance = Math.Pow(truth.Gamma * truth.MainsSd, 2);
        }

        var filter = new TwoWanderers(sd * sd, tau, mainsVariance, truth.MainsTau, noise, BlockSeconds);
        var response = filter.Response(blocks, k => Math.Log(Math.Max(1 + run.Fault.Excess((k + 0.5) * BlockSeconds), 0.02)));
        var logs = new double[blocks];
        var onsets = new int[blocks];
        var live = 0;
        var threshold = Math.Log(FalseAlarmHours * 3600 / BlockSeconds);
        for (var n = 0; n < blocks; n++)
        {
            var mean = 0.0;
            for (var i = n * perBlock; i < (n + 1) * perBlock; i++)
            {
                var log = Math.Log(Math.Max(run.Amps[i], truth.CountAmps / 2) / truth.SteadyAmps) - truth.WarmUp(run.Seconds(i));
                mean += mainsMeasured
                    ? log - (truth.Gamma * Math.Log(run.Volts[i] / CorpusOptions.NominalVolts))
                    : log - (truth.Gamma * truth.Daily(run.Seconds(i)));
            }

            var surprise = filter.Next(mean / perBlock);
            if (n * BlockSeconds < ArmSeconds)
            {
                continue;
            }

            onsets[live] = n;
            logs[live++] = 0;
            var sum = 0.0;
            var kept = 0;
            for (var j = 0; j < live; j++)
            {
                var g = response[n - onsets[j]];
                var log = logs[j] + (((g * surprise) - (g * g / 2)) / filter.SurpriseVariance);
                if (log < HopelessLog)
                {
                    continue;
                }

                (logs[kept], onsets[kept]) = (log, onsets[j]);
                kept++;
                sum += Math.Exp(Math.Min(log, 600));
            }

            live = kept;
            if (Math.Log(sum) >= threshold)
            {
                var delay = ((n + 1) * BlockSeconds) - truth.OnsetSeconds;
                return delay < 0 ? double.NaN : delay > run.Fault.HorizonSeconds ? double.PositiveInfinity : delay;
            }
        }

        return double.PositiveInfinity;
    }

    private double Sudden(CorpusRun run)
    {
        var truth = run.Truth;
        var dt = 1 / run.Rate;
        var (sd, tau) = Ambient(truth);
        var round = truth.CountAmps / truth.SteadyAmps;
        var noise = (truth.NoiseSd * truth.NoiseSd)
            + (round * round / 12 * (1 + (truth.Pole * truth.Pole)) / Math.Pow(1 - truth.Pole, 2))
            + (truth.Gamma * truth.Gamma * ((0.0005 * 0.0005) + (0.1 / 120 * (0.1 / 120) / 12)));
        var filter = new TwoWanderers(sd * sd, tau, 0, 1, noise, dt);
        var threshold = Math.Log(FalseAlarmHours * 3600 * run.Rate);
        var log = double.NegativeInfinity;
        var held = false;
        for (var i = 1; i < run.Count; i++)
        {
            var t = run.Seconds(i);
            var amps = (run.Amps[i] - (truth.Pole * run.Amps[i - 1])) / (1 - truth.Pole);
            var healthy = truth.SteadyAmps * Math.Exp((truth.Gamma * Math.Log(run.Volts[i] / CorpusOptions.NominalVolts)) + truth.WarmUp(t));
            held |= t > truth.OnsetSeconds; // the wanderers are not led astray by the fault itself
            var surprise = held ? filter.Surprise((amps / healthy) - 1) : filter.Next((amps / healthy) - 1);
            if (t < ArmSeconds)
            {
                continue;
            }

            var increment = Increment(run.Fault, surprise, filter.SurpriseVariance);
            log = (log > 40 ? log : Math.Log(1 + Math.Exp(log))) + increment;
            if (log >= threshold)
            {
                var delay = t - truth.OnsetSeconds;
                return delay < 0 ? double.NaN : delay > run.Fault.HorizonSeconds ? double.PositiveInfinity : delay;
            }
        }

        return double.PositiveInfinity;
    }

    private static double Increment(Fault fault, double surprise, double variance)
    {
        if (fault.Kind != FaultKind.Arcing)
        {
            var size = fault.Excess(1);
            return ((size * surprise) - (size * size / 2)) / variance;
        }

        // Two components: quiet with probability 1-p, else an amplitude of 0.5 to 1.5 times the size, either sign.
        var p = fault.Second / 60 * 1.1;
        var sd = Math.Sqrt(variance);
        var quiet = Math.Exp(-Math.Min(surprise * surprise / (2 * variance), 500)) / (sd * Math.Sqrt(2 * Math.PI));
        var size2 = Math.Abs(surprise) / fault.Size;
        var arc = size2 is > 0.45 and < 1.55 ? 1 / (2 * fault.Size) : 1e-6;
        return Math.Log(1 - p + (p * arc / quiet));
    }
}

/// <summary>Kalman filter of two Ornstein-Uhlenbeck wanderers seen in white noise; its surprises are white.</summary>
internal sealed class TwoWanderers
{
    private readonly double keepA, keepB, kickA, kickB, noise;
    private double a, b, paa, pab, pbb;

    public TwoWanderers(double varianceA, double tauA, double varianceB, double tauB, double noise, double step)
    {
        (keepA, keepB) = (Math.Exp(-step / tauA), Math.Exp(-step / tauB));
        (kickA, kickB) = (varianceA * (1 - (keepA * keepA)), varianceB * (1 - (keepB * keepB)));
        (paa, pbb) = (varianceA, varianceB);
        this.noise = noise;
    }

    public double SurpriseVariance { get; private set; } = 1;

    public double Surprise(double value)
    {
        SurpriseVariance = paa + (2 * pab) + pbb + noise;
        return value - a - b;
    }

    public double Next(double value)
    {
        var surprise = Surprise(value);
        var (ga, gb) = ((paa + pab) / SurpriseVariance, (pab + pbb) / SurpriseVariance);
        a = keepA * (a + (ga * surprise));
        b = keepB * (b + (gb * surprise));
        var (naa, nab, nbb) = (paa - (ga * (paa + pab)), pab - (ga * (pab + pbb)), pbb - (gb * (pab + pbb)));
        (paa, pab, pbb) = ((keepA * keepA * naa) + kickA, keepA * keepB * nab, (keepB * keepB * nbb) + kickB);
        return surprise;
    }

    /// <summary>What a signature leaves in the surprises, by age, in the steady state.</summary>
    public double[] Response(int count, Func<int, double> signature)
    {
        var twin = (TwoWanderers)MemberwiseClone();
        for (var i = 0; i < 3000; i++)
        {
            twin.Next(0);
        }

        (twin.a, twin.b) = (0, 0);
        var response = new double[count];
        for (var k = 0; k < count; k++)
        {
            response[k] = twin.Next(signature(k));
        }

        return response;
    }
}
