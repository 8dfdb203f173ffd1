using System.Diagnostics;
using System.Globalization;
using static System.FormattableString;

namespace Lampwarden.Benchmarks.Detection;

/// <summary>Runs a corpus through the watch, the plain limits and the oracles, and prints the score table.</summary>
public static class DetectionCommand
{
    private sealed record Request(CorpusOptions Options, int Runs, int NominalRuns, bool Mains, bool Oracles, bool Baselines, string? Only, bool Verbose, int Threads);

    public static int Run(string[] arguments)
    {
        ArgumentNullException.ThrowIfNull(arguments);
        string? Value(string name) => Array.IndexOf(arguments, name) is >= 0 and var at && at + 1 < arguments.Length ? arguments[at + 1] : null;
        double Number(string name, double otherwise) => Value(name) is { } text ? double.Parse(text, CultureInfo.InvariantCulture) : otherwise;
        bool Has(string name) => arguments.Contains(name);
        var runs = (int)Number("--runs", 40);
        var request = new Request(
            new CorpusOptions((int)Number("--corpus", 1), Has("--shifted"), Number("--rate", 2)) { Physical = Has("--physical") },
            runs, (int)Number("--nominal", runs), !Has("--no-mains"), !Has("--no-oracles"), !Has("--no-baselines"), Value("--only"), Has("--verbose"),
            (int)Number("--threads", 1));
        var clock = Stopwatch.StartNew();
        Console.WriteLine(Invariant($"# Corpus {request.Options.Corpus}{(request.Options.Shifted ? " shifted" : "")}{(request.Options.Physical ? " from the physical bench" : "")}, {request.Options.Rate} readings/s, mains {(request.Mains ? "measured" : "not measured")}"));
        if (request.NominalRuns > 0)
        {
            Nominal(request);
        }

        if (runs > 0)
        {
            Faulty(request);
        }

        Console.Error.WriteLine(Invariant($"took {clock.Elapsed.TotalSeconds:0} s"));
        return 0;
    }

    private static IDetector[] Detectors(Request request) => request.Baselines
        ? [new WatchDetector(), new FixedLimit("B1", 0, 1.25, 1), new FixedLimit("B1L", 0.75, 1.25, 3), new MinuteChange()]
        : [new WatchDetector()];

    private static void Nominal(Request request)
    {
        var names = Detectors(request).Select(detector => detector.Name).ToArray();
        var tallies = names.Select(_ => new Tally()).ToArray();
        Each(request, request.NominalRuns, index =>
        {
            var run = new CorpusRun();
            run.Generate(request.Options, index, Fault.Nothing);
            var detectors = Detectors(request);
            for (var d = 0; d < detectors.Length; d++)
            {
                var tally = Watch(detectors[d], run, request, index);
                lock (tallies)
                {
                    tallies[d].Add(tally);
                }
            }
        });
        Console.WriteLine();
        Console.WriteLine(Invariant($"## False unit-fault episodes per 1,000 h in {tallies[0].Hours:0} nominal hours"));
        Console.WriteLine();
        Console.WriteLine("| detector | all | 95 % interval | upward | downward | coverage % | mains events named |");
        Console.WriteLine("| --- | --- | --- | --- | --- | --- | --- |");
        for (var d = 0; d < names.Length; d++)
        {
            var t = tallies[d];
            var (low, high) = Score.PoissonInterval(t.Up + t.Down);
            var per = 1000 / t.Hours;
            Console.WriteLine(Invariant($"| {names[d]} | {(t.Up + t.Down) * per:0.00} | {low * per:0.00}-{high * per:0.00} | {t.Up * per:0.00} | {t.Down * per:0.00} | {t.ArmedHours / t.Hours * 100:0.0} | {t.Mains} |"));
        }
    }

    private sealed class Tally
    {
        public int Up, Down, Mains;
        public double Hours, ArmedHours;

        public void Add(Tally other)
        {
            Up += other.Up;
            Down += other.Down;
            Mains += other.Mains;
            Hours += other.Hours;
            ArmedHours += other.ArmedHours;
        }
    }

    private static Tally Watch(IDetector detector, CorpusRun run, Request request, int index)
    {
        var tally = new Tally { Hours = run.Hours };
        var last = double.NegativeInfinity;
        var armed = 0;
        var announced = false;
        detector.Start(run, request.Mains);
        for (var i = 0; i < run.Count; i++)
        {
            var t = run.Seconds(i);
            if (!announced && t >= run.AnnouncedSeconds)
            {
                announced = true;
                detector.Announce(t);
            }

            var cry = detector.Observe(t, run.Amps[i], request.Mains ? run.Volts[i] : double.NaN);
            armed += detector.Armed ? 1 : 0;
            if (cry == Cry.Mains)
            {
                tally.Mains++;
            }

            if (cry is Cry.Up or Cry.Down)
            {
                if (t - last > Score.EpisodeSeconds)
                {
                    (tally.Up, tally.Down) = cry == Cry.Up ? (tally.Up + 1, tally.Down) : (tally.Up, tally.Down + 1);
                    if (request.Verbose && detector is WatchDetector watch)
                    {
                        Console.WriteLine(Invariant($"run {index} {t / 3600:0.00} h {watch.Called} {string.Join(' ', watch.Finding.Evidence.Select(pair => Invariant($"{pair.Key}={pair.Value:0.####}")))} | sag {run.InSag[i]} garbled {run.Garbled[i]} load {run.Truth.LoadSeconds / 3600:0.00} gamma {run.Truth.Gamma:0.00} noise {run.Truth.NoiseSd * 100:0.00} a1 {run.Truth.WarmA1 * 100:0.0} T1 {run.Truth.WarmT1 / 60:0} a2 {run.Truth.WarmA2 * 100:0.00} T2 {run.Truth.WarmT2 / 60:0}"));
                    }
                }

                last = t;
            }
        }

        tally.ArmedHours = armed / run.Rate / 3600;
        return tally;
    }

    private static void Faulty(Request request)
    {
        Console.WriteLine();
        Console.WriteLine("## Delay from onset, seconds: median / 95 %, missed %, right name 10 s after the alarm");
        Console.WriteLine();
        Console.WriteLine("| fault | detector | trials | median | 95 % | missed % | dropped | excess % | right name % | oracle | cautious | median / oracle | median / cautious | 95 % / cautious 95 % |");
        Console.WriteLine("| --- | --- | --- | --- | --- | --- | --- | --- | --- | --- | --- | --- | --- | --- |");
        var names = Detectors(request).Select(detector => detector.Name).ToArray();
        var (right, named) = (0, 0);
        foreach (var fault in (request.Options.Physical ? Fault.Physical : Fault.All).Where(fault => request.Only is null || fault.Name.Contains(request.Only, StringComparison.Ordinal)))
        {
            var trials = names.Select(_ => new Trial[request.Runs]).ToArray();
            Each(request, request.Runs, index =>
            {
                var run = new CorpusRun();
                var (oracle, cautious) = (double.NaN, double.NaN);
                if (request.Oracles && !request.Options.Physical)
                {
                    run.Generate(request.Options with { Clean = true }, index, fault);
                    oracle = new Oracle(false, request.Mains).Delay(run);
                    cautious = new Oracle(true, request.Mains).Delay(run);
                }

                run.Generate(request.Options, index, fault);
                var detectors = Detectors(request);
                for (var d = 0; d < detectors.Length; d++)
                {
                    trials[d][index] = Try(detectors[d], run, request) with { Oracle = oracle, Cautious = cautious };
                }
            });
            for (var d = 0; d < names.Length; d++)
            {
                Print(fault, names[d], trials[d]);
            }

            if (request.Verbose)
            {
                Console.WriteLine("    " + string.Join(", ", trials[0].GroupBy(trial => trial.Called).Select(group => Invariant($"{group.Key}: {group.Count()}"))) + ForecastText(trials[0]) + Invariant($" | cried again within 10 s: {trials[0].Sum(trial => trial.Again)}"));
            }

            if (fault.Kind != FaultKind.Sag)
            {
                right += trials[0].Count(trial => double.IsFinite(trial.DelaySeconds) && Score.IsRight(fault.Kind, trial.Called));
                named += trials[0].Count(trial => double.IsFinite(trial.DelaySeconds));
            }
        }

        Console.WriteLine();
        Console.WriteLine(Invariant($"Right name 10 s after the alarm over all faulty runs: {100.0 * right / Math.Max(1, named):0.0} % of {named}."));
    }

    private static Trial Try(IDetector detector, CorpusRun run, Request request)
    {
        detector.Start(run, request.Mains);
        var (alarm, excess, again) = (double.NaN, 0.0, 0);
        for (var i = 0; i < run.Count; i++)
        {
            var t = run.Seconds(i);
            var cry = detector.Observe(t, run.Amps[i], request.Mains ? run.Volts[i] : double.NaN);
            if (!double.IsNaN(alarm))
            {
                again += cry is Cry.Up or Cry.Down ? 1 : 0;
                if (t >= alarm + 10)
                {
                    break;
                }

                continue;
            }

            if (cry is not (Cry.Up or Cry.Down))
            {
                continue;
            }

            if (t < run.Truth.OnsetSeconds)
            {
                if (t > run.Truth.OnsetSeconds - Score.DropSeconds)
                {
                    return new Trial(double.NaN, 0, "", 0, 0);
                }

                continue;
            }

            if (!run.Garbled[i])
            {
                (alarm, excess) = (t, run.Excess(t - run.Truth.OnsetSeconds));
                (detector as WatchDetector)?.Hold();
            }
        }

        var delay = alarm - run.Truth.OnsetSeconds;
        return double.IsNaN(alarm) || delay > run.Fault.HorizonSeconds
            ? new Trial(double.PositiveInfinity, double.NaN, "", 0, 0)
            : new Trial(delay, excess, detector.Called, 0, 0) { Again = again, LampNamed = LampNamed(detector, run), Forecast = ForecastOf(detector, run, alarm) };
    }

    private static bool? LampNamed(IDetector detector, CorpusRun run)
    {
        if (run.Bench is not { } bench || run.DarkLamp < 0 || detector is not WatchDetector watch)
        {
            return null;
        }

        // Only where the lamps differ by a fifth or more can they be told apart by current.
        var watts = bench.Bank.Lamps[run.DarkLamp].RatedWatts;
        var twin = bench.Bank.Lamps.Where((_, index) => index != run.DarkLamp).Any(other => Math.Abs(other.RatedWatts / watts - 1) < 0.2);
        return twin ? null : watch.Finding.Explanation.Contains($"lamp {bench.Bank.Lamps[run.DarkLamp].Name} has gone dark", StringComparison.Ordinal)
            && !watch.Finding.Explanation.Contains("either", StringComparison.Ordinal);
    }

    /// <summary>Whether the moment foretold for the warning level, as said within ten seconds of the alarm, holds the true one: -1 early, 0 inside, +1 late; null without forecast.</summary>
    private static int? ForecastOf(IDetector detector, CorpusRun run, double alarm)
    {
        if (detector is not WatchDetector { Finding.Evidence: var evidence } || !evidence.TryGetValue("warningInLowSeconds", out var low)
            || run.Fault.Kind is not (FaultKind.Creep or FaultKind.Runaway))
        {
            return null;
        }

        var target = (evidence["warningAmps"] / evidence["healthyAmps"]) - 1;
        var (early, late) = (0.0, 1e6);
        for (var i = 0; i < 60; i++)
        {
            var middle = (early + late) / 2;
            (early, late) = run.Excess(middle) < target ? (middle, late) : (early, middle);
        }

        var age = late;
        var due = run.Truth.OnsetSeconds + age - alarm;
        var high = double.IsNaN(evidence["warningInHighSeconds"]) ? double.PositiveInfinity : evidence["warningInHighSeconds"];
        return due < low ? -1 : due > high ? 1 : 0;
    }

    private static string ForecastText(Trial[] trials)
    {
        var given = trials.Where(trial => trial.Forecast is not null).ToArray();
        return given.Length == 0 ? "" : Invariant($" | forecast inside {100.0 * given.Count(trial => trial.Forecast == 0) / given.Length:0} %, true moment earlier {100.0 * given.Count(trial => trial.Forecast < 0) / given.Length:0} %, later {100.0 * given.Count(trial => trial.Forecast > 0) / given.Length:0} %");
    }

    private static void Print(Fault fault, string name, Trial[] trials)
    {
        var kept = trials.Where(trial => !double.IsNaN(trial.DelaySeconds)).ToArray();
        var median = Score.Quantile(kept.Select(trial => trial.DelaySeconds), 0.5);
        var late = Score.Quantile(kept.Select(trial => trial.DelaySeconds), 0.95);
        var oracle = Score.Quantile(trials.Select(trial => trial.Oracle), 0.5);
        var cautious = Score.Quantile(trials.Select(trial => trial.Cautious), 0.5);
        var cautiousLate = Score.Quantile(trials.Select(trial => trial.Cautious), 0.95);
        var found = kept.Where(trial => double.IsFinite(trial.DelaySeconds)).ToArray();
        var missed = kept.Length == 0 ? 0 : 100.0 * (kept.Length - found.Length) / kept.Length;
        var named = found.Length == 0 ? 0 : 100.0 * found.Count(trial => Score.IsRight(fault.Kind, trial.Called)) / found.Length;
        var excess = Score.Quantile(found.Select(trial => trial.Excess), 0.5) * 100;
        var digits = median < 100 ? "0.0" : "0";
        Console.WriteLine(Invariant($"| {fault.Name} | {name} | {kept.Length} | {Score.Show(median, digits)} | {Score.Show(late, digits)} | {missed:0.#} | {trials.Length - kept.Length} | {Score.Show(excess, "0.0")} | {named:0.#} | {Score.Show(oracle, digits)} | {Score.Show(cautious, digits)} | {Score.Show(median / oracle, "0.00")} | {Score.Show(median / cautious, "0.00")} | {Score.Show(late / cautiousLate, "0.00")} |"));
        var lamps = trials.Where(trial => trial.LampNamed is not null).ToArray();
        if (lamps.Length > 0)
        {
            Console.WriteLine(Invariant($"|  | right lamp named | {lamps.Length} | {100.0 * lamps.Count(trial => trial.LampNamed == true) / lamps.Length:0.#} % |"));
        }

        Console.Out.Flush();
    }

    private static void Each(Request request, int count, Action<int> work) =>
        Parallel.For(0, count, new ParallelOptions { MaxDegreeOfParallelism = request.Threads }, work);
}
