using System.Globalization;
using Lampwarden.Analysis.Checks;

namespace Lampwarden.Benchmarks.Physics;

/// <summary><c>physics-checks</c>: every external check with its residual, as the table of docs/model.md.</summary>
internal static class PhysicsChecksCommand
{
    public static int Run()
    {
        var rows = new List<ExternalCheck>(PublishedFigures.All());
        rows.AddRange(MeasuredLamp.All.Select(lamp =>
        {
            var fit = lamp.BestFit();
            var share = lamp.Fill == Analysis.Lamps.LampFill.Gas ? "gas" : "lead";
            return new ExternalCheck(
                "measured lamp", string.Create(CultureInfo.InvariantCulture, $"lamp {lamp.Name}, {share} loss fitted ({fit.Share:0.000}), RMS over {lamp.At.Length} points"),
                "public student-laboratory readings", double.NaN, double.NaN, fit.Rms, 0.015);
        }));
        if (Find("ngspice") is { } ngspice)
        {
            rows.AddRange(NgspiceComparison.Circuits.Select(circuit => new ExternalCheck(
                "ngspice", string.Create(CultureInfo.InvariantCulture, $"{circuit.What} ({circuit.Volts:0} V {circuit.Hertz:0} Hz), RMS of the current's difference"),
                "ngspice 39, same equations", double.NaN, double.NaN, NgspiceComparison.Difference(ngspice, circuit), circuit.Within)));
        }
        else
        {
            Console.Error.WriteLine("ngspice is not installed: its rows are left out.");
        }

        if (ScipyComparison.FindPython() is { } python)
        {
            var (amps, kelvin) = ScipyComparison.Difference(python);
            rows.Add(new ExternalCheck("scipy", "stiff: locked motor behind a lamp, RMS current", "scipy, Radau", double.NaN, double.NaN, amps, 0.001));
            rows.Add(new ExternalCheck("scipy", "the same, filament temperature at its end", "scipy, Radau", double.NaN, double.NaN, kelvin, 0.001));
        }
        else
        {
            Console.Error.WriteLine("No python3 with scipy is installed: its rows are left out.");
        }

        Console.WriteLine("| what | source | published | ours | residual | held to |");
        Console.WriteLine("|---|---|---|---|---|---|");
        foreach (var row in rows)
        {
            Console.WriteLine(string.Create(CultureInfo.InvariantCulture,
                $"| {row.What} | {row.Source} | {Number(row.Published)} | {Number(row.Ours)} | {Percent(row)} | {(double.IsNaN(row.Within) ? "shown only" : $"{100 * row.Within:0.##} %")} |"));
        }

        var beyond = rows.Count(row => !row.Holds);
        Console.Error.WriteLine($"{rows.Count} checks, {beyond} beyond their tolerance.");
        return beyond == 0 ? 0 : 1;
    }

    internal static string? Find(string program) => (Environment.GetEnvironmentVariable("PATH") ?? "").Split(Path.PathSeparator)
        .Select(folder => Path.Combine(folder, program)).FirstOrDefault(File.Exists);

    private static string Percent(ExternalCheck row) => double.IsNaN(row.Published)
        ? string.Create(CultureInfo.InvariantCulture, $"{100 * row.Residual:0.000} %")
        : string.Create(CultureInfo.InvariantCulture, $"{100 * row.Residual:+0.0;-0.0;0.0} %");

    private static string Number(double value) => double.IsNaN(value) ? "" : value.ToString("G4", CultureInfo.InvariantCulture);
}
