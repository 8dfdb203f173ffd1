namespace Lampwarden.Analysis.Lamps;

/// <summary>
/// Steady RMS state of one bank by Newton's method: each lamp is replaced by the tangent of its curve (a voltage behind a resistance),
/// series and parallel parts are joined, the current is shared out again, until no lamp's volts move by more than one part in 1e7. As
/// each step squares the error, the answer is then good to about 1e-13.
/// Allocates nothing after construction and starts from its last answer; so not thread-safe.
/// </summary>
internal sealed class BankSolver
{
    private const int MostIterations = 100;
    private const double Tolerance = 1e-7;
    private const double OpenOhms = 1e12;

    private readonly BankNetwork network;
    private readonly FilamentCurve?[] curves;
    private readonly double[] nodeVolts;
    private readonly double[] nodeOhms;
    private readonly double[] sumVolts;
    private readonly double[] sumOhms;
    private readonly double[] through;
    private readonly double[] volts;
    private readonly double[] amps;
    private readonly double[] guesses;

    public BankSolver(Bank bank)
    {
        network = bank.Network;
        var nodes = network.Parent.Length;
        (nodeVolts, nodeOhms, sumVolts, sumOhms, through) = (new double[nodes], new double[nodes], new double[nodes], new double[nodes], new double[nodes]);
        var lamps = network.Lamps;
        (volts, amps, guesses) = (new double[lamps.Length], new double[lamps.Length], new double[lamps.Length]);
        CurrentScale = new double[lamps.Length];
        IsOut = new bool[lamps.Length];
        curves = new FilamentCurve?[lamps.Length];
        for (var lamp = 0; lamp < lamps.Length; lamp++)
        {
            CurrentScale[lamp] = 1;
            curves[lamp] = lamps[lamp].Filament is null ? null : lamps[lamp].Curve;
            guesses[lamp] = double.IsNaN(lamps[lamp].RatedVolts) ? 1 : 0.3 * lamps[lamp].RatedVolts;
        }
    }

    /// <summary>Current of each lamp relative to its curve at the same volts: 1.04 is a lamp of 4 % more watts.</summary>
    public double[] CurrentScale { get; }

    /// <summary>A lamp that is burnt out or switched off.</summary>
    public bool[] IsOut { get; }

    /// <summary>Volts across each lamp at the last answer.</summary>
    public ReadOnlySpan<double> LampVolts => volts;

    /// <summary>Current of each lamp at the last answer.</summary>
    public ReadOnlySpan<double> LampAmps => amps;

    /// <summary>Volts across the bank at the last answer.</summary>
    public double BankVolts { get; private set; }

    /// <summary>Slope dV/dI of the bank at the last answer, in ohms.</summary>
    public double SlopeOhms { get; private set; }

    /// <summary>Puts another curve in a lamp's place.</summary>
    public void SetCurve(int lamp, FilamentCurve curve) => curves[lamp] = curve;

    /// <summary>Temperature of a lamp at the last answer; NaN for a plain resistor.</summary>
    public double Kelvin(int lamp) => curves[lamp]?.Kelvin(volts[lamp]) ?? double.NaN;

    /// <summary>Current that a source drives through the bank and a resistance in series with it.</summary>
    public double Feed(double sourceVolts, double seriesOhms) => Solve(sourceVolts, seriesOhms, double.NaN);

    /// <summary>Volts across the bank at a current.</summary>
    public double Carry(double lineAmps)
    {
        Solve(0, 0, lineAmps);
        return BankVolts;
    }

    private double Solve(double sourceVolts, double seriesOhms, double givenAmps)
    {
        if (sourceVolts == 0 && !(givenAmps > 0))
        {
            Array.Clear(volts);
            Array.Clear(amps);
            BankVolts = 0;
            return 0;
        }

        var root = network.Parent.Length - 1;
        for (var iteration = 0; iteration < MostIterations; iteration++)
        {
            Join();
            var current = double.IsNaN(givenAmps) ? (sourceVolts - nodeVolts[root]) / (nodeOhms[root] + seriesOhms) : givenAmps;
            through[root] = current;
            if (ShareOut() < Tolerance)
            {
                BankVolts = nodeVolts[root] + nodeOhms[root] * current;
                SlopeOhms = nodeOhms[root];
                return current;
            }
        }

        throw new InvalidOperationException(
            $"The bank's steady state was not found in {MostIterations} steps at {sourceVolts} V and {seriesOhms} ohm; please report the bank.");
    }

    private double Amps(int lamp, double lampVolts, out double siemens)
    {
        if (IsOut[lamp])
        {
            siemens = 1 / OpenOhms;
            return lampVolts * siemens;
        }

        if (curves[lamp] is not { } curve)
        {
            siemens = CurrentScale[lamp] / network.Lamps[lamp].ResistorOhms;
            return lampVolts * siemens;
        }

        var scale = CurrentScale[lamp];
        var current = scale * curve.Amps(lampVolts, out siemens);
        siemens *= scale;
        return current;
    }

    private void Join()
    {
        Array.Clear(sumVolts);
        Array.Clear(sumOhms);
        for (var node = 0; node < nodeOhms.Length; node++)
        {
            var leaf = network.Leaf[node];
            if (leaf >= 0)
            {
                var current = Amps(leaf, guesses[leaf], out var siemens);
                nodeOhms[node] = 1 / siemens;
                nodeVolts[node] = guesses[leaf] - current / siemens;
            }
            else if (network.IsParallel[node])
            {
                nodeOhms[node] = 1 / sumOhms[node];
                nodeVolts[node] = sumVolts[node] / sumOhms[node];
            }
            else
            {
                nodeOhms[node] = sumOhms[node];
                nodeVolts[node] = sumVolts[node];
            }

            var parent = network.Parent[node];
            if (parent < 0)
            {
                return;
            }

            // In a parallel part the sums are of conductance and of short-circuit current.
            var weight = network.IsParallel[parent] ? 1 / nodeOhms[node] : 1;
            sumOhms[parent] += network.IsParallel[parent] ? weight : nodeOhms[node];
            sumVolts[parent] += weight * nodeVolts[node];
        }
    }

    // Returns the largest relative change of a lamp's volts.
    private double ShareOut()
    {
        var worst = 0.0;
        for (var node = through.Length - 1; node >= 0; node--)
        {
            var parent = network.Parent[node];
            if (parent >= 0)
            {
                through[node] = network.IsParallel[parent]
                    ? (nodeVolts[parent] + nodeOhms[parent] * through[parent] - nodeVolts[node]) / nodeOhms[node]
                    : through[parent];
            }

            var leaf = network.Leaf[node];
            if (leaf >= 0)
            {
                var guess = guesses[leaf];
                var next = nodeVolts[node] + nodeOhms[node] * through[node];

                // The curve is concave: a tangent taken far out may cross zero, where no lamp works.
                next = Math.Max(next, 0.1 * guess);
                worst = Math.Max(worst, Math.Abs(next - guess) / Math.Max(next, 1e-15));
                volts[leaf] = next;
                amps[leaf] = through[node];
                guesses[leaf] = Math.Max(next, 1e-15);
            }
        }

        return worst;
    }
}
