namespace Lampwarden.Benchmarks.Detection;

/// <summary>The readings of one run, and which of them are garbled or lie in a sag. The arrays are reused from run to run.</summary>
public sealed class CorpusRun
{
    public int Count { get; private set; }
    public double Rate { get; private set; }
    public Fault Fault { get; private set; } = Fault.Nothing;
    public RunTruth Truth { get; private set; } = null!;
    public double[] Amps { get; private set; } = [];
    public double[] Volts { get; private set; } = [];
    public bool[] Garbled { get; private set; } = [];
    public bool[] InSag { get; private set; } = [];

    /// <summary>What the watch is told to expect; null for corpora made from exponents.</summary>
    public Lampwarden.Analysis.Watching.Expectation? Expectation => Bench?.Expectation;

    /// <summary>Lamps and unit behind the current; null for corpora made from exponents.</summary>
    public PhysicalBench? Bench { get; private set; }

    /// <summary>The lamp a lamp fault takes away; -1 where there is none.</summary>
    public int DarkLamp { get; private set; } = -1;

    /// <summary>Excess over the healthy current u seconds after onset, relative.</summary>
    public double Excess(double u)
    {
        if (Bench is null)
        {
            return Fault.Excess(u);
        }

        var healthy = Bench.Amps(0, 0, -1);
        return Fault.Kind switch
        {
            FaultKind.Lamp => (Bench.Amps(0, 0, DarkLamp) / healthy) - 1,
            FaultKind.Open => -1,
            _ => (Bench.Amps(0, Math.Log(1 + Fault.Excess(u)), -1) / healthy) - 1,
        };
    }

    public double Seconds(int i) => i / Rate;

    public double Hours => Count / Rate / 3600;

    /// <summary>When the user told of a load change; NaN if never.</summary>
    public double AnnouncedSeconds => Truth.LoadSeconds;

    /// <summary>Draws one run. The same arguments give the same readings for ever.</summary>
    public void Generate(CorpusOptions options, int run, Fault fault)
    {
        Fault = fault;
        Rate = options.Rate;
        Truth = RunTruth.Draw(options, run, fault.Kind == FaultKind.None);
        Bench = options.Physical ? PhysicalBench.Of(options, run) : null;
        if (Bench is not null)
        {
            // The drawn level gives way to the bench's; what was drawn relative to it goes along.
            var steady = Bench.Amps(0, 0, -1);
            Truth = Truth with { SteadyAmps = steady, CountAmps = Truth.CountAmps / Truth.SteadyAmps * steady, CapAmps = double.PositiveInfinity };
            DarkLamp = fault.Kind == FaultKind.Lamp ? (int)(Xoshiro256.For(options.Corpus, run, 21).Unit() * Bench.Bank.Lamps.Count) : -1;
        }

        var seconds = fault.Kind == FaultKind.None ? 24 * 3600 : Truth.OnsetSeconds + fault.HorizonSeconds + 60;
        Count = (int)(seconds * Rate);
        if (Amps.Length < Count)
        {
            (Amps, Volts, Garbled, InSag) = (new double[Count], new double[Count], new bool[Count], new bool[Count]);
        }

        Array.Clear(Garbled);
        Array.Clear(InSag);
        Mains(options, run, seconds);
        Current(options, run);
    }

    /// <summary>Fills <see cref="Volts"/> with the true mains as ln(V/Vnom); the current is made from it before the meter's errors are put on.</summary>
    private void Mains(CorpusOptions options, int run, double seconds)
    {
        var dt = 1 / Rate;
        var random = Xoshiro256.For(options.Corpus, run, 2);
        var (keep, flickerKeep) = (Math.Exp(-dt / Truth.MainsTau), Math.Exp(-dt / 4));
        var (kick, flickerKick) = (Truth.MainsSd * Math.Sqrt(1 - (keep * keep)), 0.0008 * Math.Sqrt(1 - (flickerKeep * flickerKeep)));
        var (wander, flicker) = (Truth.MainsSd * random.Normal(), 0.0008 * random.Normal());
        for (var i = 0; i < Count; i++)
        {
            wander = (keep * wander) + (kick * random.Normal());
            flicker = (flickerKeep * flicker) + (flickerKick * random.Normal());
            Volts[i] = wander + flicker + Truth.Daily(i * dt);
        }

        if (!options.Clean)
        {
            Taps(Xoshiro256.For(options.Corpus, run, 3), options.Shifted ? 16 : 6, seconds);
            Sags(Xoshiro256.For(options.Corpus, run, 4), options.Shifted ? 6 : 2, seconds);
        }

        if (Fault.Kind == FaultKind.Sag)
        {
            Sag(Truth.OnsetSeconds, Fault.Second, Fault.Size);
        }
    }

    private void Taps(Xoshiro256 random, double perDay, double seconds)
    {
        var tap = 0.0;
        for (var t = random.Exponential(86400 / perDay); t < seconds;)
        {
            var step = random.Uniform(0.006, 0.0125) * random.Sign();
            step = Math.Abs(tap + step) > 0.015 ? -step : step;
            tap += step;
            var next = t + random.Exponential(86400 / perDay);
            for (var i = (int)Math.Ceiling(t * Rate); i < Math.Min(Count, next * Rate); i++)
            {
                Volts[i] += tap;
            }

            t = next;
        }
    }

    private void Sags(Xoshiro256 random, double perDay, double seconds)
    {
        for (var t = random.Exponential(86400 / perDay); t < seconds; t += random.Exponential(86400 / perDay))
        {
            Sag(t, random.LogUniform(0.5, 60), random.Uniform(0.05, 0.10));
        }
    }

    private void Sag(double at, double lasts, double depth)
    {
        for (var i = (int)Math.Ceiling(at * Rate); i < Math.Min(Count, (at + lasts) * Rate); i++)
        {
            Volts[i] += Math.Log(1 - depth);
            InSag[i] = true;
        }
    }

    private void Current(CorpusOptions options, int run)
    {
        var dt = 1 / Rate;
        var random = Xoshiro256.For(options.Corpus, run, options.Shifted ? 105 : 5);
        var slow = Xoshiro256.For(options.Corpus, run, 6);
        var garble = Xoshiro256.For(options.Corpus, run, 7);
        var meter = Xoshiro256.For(options.Corpus, run, 8);
        var disturb = new Disturbance(Fault, Xoshiro256.For(options.Corpus, run, 9), Truth.OnsetSeconds);
        var keep = Math.Exp(-dt / Truth.AmbientTau);
        var kick = Truth.AmbientSd * Math.Sqrt(1 - (keep * keep));
        var ambient = Truth.AmbientSd * slow.Normal();
        var garbleMean = 3600 / (options.Shifted ? 0.3 : 0.1);
        var nextGarble = options.Clean ? double.PositiveInfinity : garble.Exponential(garbleMean);
        var filtered = double.NaN;
        for (var i = 0; i < Count; i++)
        {
            var t = i * dt;
            ambient = (keep * ambient) + (kick * slow.Normal());
            var log = (Truth.Gamma * Volts[i]) + Truth.WarmUp(t) + ambient + Hvac(t);
            var load = t >= Truth.LoadSeconds ? 1 + Truth.LoadShare + (Truth.RelaxShare * Math.Exp(-(t - Truth.LoadSeconds) / Truth.RelaxTau)) : 1;
            var amps = Bench is null
                ? Math.Min(Math.Max(Truth.SteadyAmps * Math.Exp(log) * load * disturb.Factor(t), 0), Truth.CapAmps)
                : FromBench(t, Volts[i], log - (Truth.Gamma * Volts[i]) + Math.Log(load), disturb.Factor(t));
            var read = amps * (1 + (Truth.NoiseSd * (options.Shifted ? random.HeavyTailed() : random.Normal())));
            filtered = double.IsNaN(filtered) ? read : (Truth.Pole * filtered) + ((1 - Truth.Pole) * read);
            var shown = filtered;
            if (t >= nextGarble)
            {
                shown *= garble.LogUniform(0.3, 3);
                Garbled[i] = true;
                nextGarble = t + garble.Exponential(garbleMean);
            }

            Amps[i] = Math.Round(shown / Truth.CountAmps) * Truth.CountAmps;
            var volts = CorpusOptions.NominalVolts * Math.Exp(Volts[i]) * (1 + (0.0005 * meter.Normal()));
            Volts[i] = Math.Round(volts * 10) / 10;
        }
    }

    /// <summary>Contacts cut the line current itself; everything else is done to the unit's load or to a lamp.</summary>
    private double FromBench(double t, double logVolts, double logLoad, double factor)
    {
        var dark = t >= Truth.OnsetSeconds ? DarkLamp : -1;
        return Fault.Kind is FaultKind.Creep or FaultKind.Short or FaultKind.Runaway
            ? Bench!.Amps(logVolts, logLoad + Math.Log(factor), -1)
            : Bench!.Amps(logVolts, logLoad, dark) * (Fault.Kind == FaultKind.Lamp ? 1 : factor);
    }

    /// <summary>A room kept by a thermostat: exponential rise and fall, half the period each.</summary>
    private double Hvac(double t)
    {
        if (Truth.HvacShare == 0)
        {
            return 0;
        }

        var phase = t / Truth.HvacPeriod % 1;
        var edge = Math.Tanh(0.5); // half-period of one time constant: swings between -edge and +edge
        return Truth.HvacShare / edge * (phase < 0.5 ? 1 - ((1 + edge) * Math.Exp(-2 * phase)) : -1 + ((1 + edge) * Math.Exp(-2 * (phase - 0.5))));
    }
}

/// <summary>What the fault does to the current, reading by reading.</summary>
internal sealed class Disturbance(Fault fault, Xoshiro256 random, double onset)
{
    private double burstFrom = double.NaN;
    private double burstTo;

    public double Factor(double t)
    {
        var u = t - onset;
        if (u < 0)
        {
            return 1;
        }

        return fault.Kind switch
        {
            FaultKind.Arcing => Arc(u),
            FaultKind.Hiccup => u / fault.Size % 1 < 0.5 ? 0.02 : 1,
            _ => 1 + fault.Excess(u),
        };
    }

    private double Arc(double u)
    {
        if (double.IsNaN(burstFrom))
        {
            NextBurst(0);
        }

        while (u >= burstTo)
        {
            NextBurst(burstTo);
        }

        return u >= burstFrom ? 1 + (random.Sign() * random.Uniform(0.5, 1.5) * fault.Size) : 1;
    }

    private void NextBurst(double after)
    {
        burstFrom = after + random.Exponential(60 / fault.Second);
        burstTo = burstFrom + random.Uniform(0.2, 2);
    }
}
