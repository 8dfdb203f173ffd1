using Lampwarden.Analysis.Watching;

namespace Lampwarden.Benchmarks.Detection;

/// <summary>What a detector says at one reading.</summary>
public enum Cry
{
    Nothing,
    Up,
    Down,

    /// <summary>Named a mains event: no unit fault.</summary>
    Mains,
}

/// <summary>One way of watching, put through the same runs as the others.</summary>
public interface IDetector
{
    string Name { get; }

    bool Armed { get; }

    void Start(CorpusRun run, bool mainsMeasured);

    void Announce(double seconds);

    Cry Observe(double seconds, double amps, double volts);

    /// <summary>What the last cry is called by now.</summary>
    string Called { get; }
}

/// <summary>The product's watch.</summary>
public sealed class WatchDetector : IDetector
{
    private Watch watch = null!;
    private int number;
    private bool held;

    /// <summary>The last cry is the alarm to be scored; later ones do not change what it is called.</summary>
    public void Hold() => held = true;

    public string Name => "watch";

    public bool Armed => watch.Phase == WatchPhase.Watching;

    public Watch Watch => watch;

    /// <summary>The finding behind the last cry.</summary>
    public Finding Finding => watch.Findings[number - 1];

    public string Called => number > 0 ? Finding.Signature.Text() : "";

    public void Start(CorpusRun run, bool mainsMeasured)
    {
        ArgumentNullException.ThrowIfNull(run);
        (number, held) = (0, false);
        watch = new Watch(new WatchSettings
        {
            ReadingsPerSecond = run.Rate,
            NominalMainsVolts = CorpusOptions.NominalVolts,
            MainsMeasured = mainsMeasured,
            Meter = new MeterTraits(CountAmps: run.Truth.CountAmps),
            Expectation = run.Expectation,
        });
    }

    public void Announce(double seconds) => watch.Announce(seconds, new Announcement(AnnouncementKind.LoadChanged));

    public Cry Observe(double seconds, double amps, double volts)
    {
        var cry = Cry.Nothing;
        var changes = watch.Observe(new Observation(seconds, amps, volts));
        for (var i = 0; i < changes.Count; i++)
        {
            var (kind, finding) = changes[i];
            if (kind == ChangeKind.Raised && finding.Signature == Signature.MainsShift && cry == Cry.Nothing)
            {
                cry = Cry.Mains;
            }
            else if (kind == ChangeKind.Raised && IsUnitFault(finding.Signature))
            {
                number = held ? number : finding.Number;
                cry = IsDownward(finding) ? Cry.Down : Cry.Up;
            }
        }

        return cry;
    }

    public static bool IsUnitFault(Signature signature) => signature
        is not (Signature.MeterSilent or Signature.MeterStuck or Signature.MeterOverload or Signature.MainsShift);

    private static bool IsDownward(Finding finding) => finding.Signature is Signature.OpenCircuit or Signature.LampOut
        || (finding.Signature == Signature.OffPrediction && finding.Evidence.GetValueOrDefault("excessPercent") < 0);
}

/// <summary>B1 and B1L: a fixed limit around the level seen at the end of the first hour, as many readings in a row as asked.</summary>
public sealed class FixedLimit(string name, double low, double high, int inARow) : IDetector
{
    private readonly List<double> learned = [];
    private double learnUntil;
    private double steady;
    private int count;

    public string Name => name;

    public bool Armed => steady > 0;

    public string Called => "limit";

    public void Start(CorpusRun run, bool mainsMeasured) => Relearn(3600);

    public void Announce(double seconds) => Relearn(seconds + 1800);

    private void Relearn(double until)
    {
        (learnUntil, steady, count) = (until, 0, 0);
        learned.Clear();
    }

    public Cry Observe(double seconds, double amps, double volts)
    {
        if (seconds < learnUntil)
        {
            if (seconds >= learnUntil - 300)
            {
                learned.Add(amps);
            }

            return Cry.Nothing;
        }

        if (steady == 0)
        {
            learned.Sort();
            steady = learned[learned.Count / 2];
        }

        var side = amps > steady * high ? 1 : amps < steady * low ? -1 : 0;
        count = side == 0 ? 0 : count + 1;
        return count < inARow ? Cry.Nothing : side > 0 ? Cry.Up : Cry.Down;
    }
}

/// <summary>B2: a change of more than a tenth over a minute.</summary>
public sealed class MinuteChange : IDetector
{
    private double[] past = [];
    private int next;
    private bool full;

    public string Name => "B2";

    public bool Armed => full;

    public string Called => "change";

    public void Start(CorpusRun run, bool mainsMeasured)
    {
        ArgumentNullException.ThrowIfNull(run);
        (past, next, full) = (new double[(int)Math.Max(1, 60 * run.Rate)], 0, false);
    }

    public void Announce(double seconds) => (next, full) = (0, false);

    public Cry Observe(double seconds, double amps, double volts)
    {
        var old = past[next];
        past[next] = amps;
        next = (next + 1) % past.Length;
        var was = full;
        full |= next == 0;
        return !was || Math.Abs(amps / old - 1) <= 0.10 ? Cry.Nothing : amps > old ? Cry.Up : Cry.Down;
    }
}
