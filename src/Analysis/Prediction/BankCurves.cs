using Lampwarden.Analysis.Lamps;

namespace Lampwarden.Analysis.Prediction;

/// <summary>A bank's volts at a current for values of its lamps' inputs; curves once made are kept.</summary>
internal sealed class BankCurves(Bank bank, BenchInputs inputs)
{
    private readonly BankSolver solver = new(bank);
    private readonly Dictionary<Filament, FilamentCurve> curves = [];

    public double Volts(ReadOnlySpan<double> values, double amps)
    {
        Prepare(values);
        return solver.Carry(amps);
    }

    /// <summary>Sets the solver's lamps to these values.</summary>
    public BankSolver Prepare(ReadOnlySpan<double> values)
    {
        var lamps = inputs.LampsOf(values);
        for (var lamp = 0; lamp < lamps.Count; lamp++)
        {
            var (moved, original) = (lamps[lamp], bank.Lamps[lamp]);
            if (moved.Filament is { } filament)
            {
                solver.SetCurve(lamp, CurveOf(original, filament));
                solver.CurrentScale[lamp] = filament.Watts / original.Filament!.Watts;
            }
            else
            {
                solver.CurrentScale[lamp] = original.ResistorOhms / moved.ResistorOhms;
            }
        }

        return solver;
    }

    // Watts only scale the current, and the coil factor only the speed; any other change needs a curve of its own.
    private FilamentCurve CurveOf(Lamp original, Filament filament)
    {
        var likeOriginal = filament with { Watts = original.Filament!.Watts, CoilFactor = original.Filament.CoilFactor };
        if (likeOriginal == original.Filament)
        {
            return original.Curve;
        }

        if (!curves.TryGetValue(likeOriginal, out var curve))
        {
            curve = new FilamentCurve(likeOriginal);
            curves.Add(likeOriginal, curve);
        }

        return curve;
    }
}
