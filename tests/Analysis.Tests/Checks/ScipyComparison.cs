using System.Diagnostics;
using System.Globalization;
using System.Text;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Checks;

/// <summary>
/// One stiff case against scipy (Debian package python3-scipy), implicit Radau method with its own error control: a motor that a small lamp
/// cannot turn. Its stator answers in 45 microseconds behind the hot lamp, the filament in tenths of a second.
/// </summary>
public static class ScipyComparison
{
    private const double Seconds = 0.3;

    /// <summary>A Python that has scipy; null where there is none.</summary>
    public static string? FindPython() => (Environment.GetEnvironmentVariable("PATH") ?? "").Split(Path.PathSeparator).Append("/usr/bin")
        .Select(folder => Path.Combine(folder, "python3")).Where(File.Exists).Distinct().FirstOrDefault(HasScipy);

    /// <summary>Relative difference of the RMS current over the time from switch-on, and of the filament temperature at its end.</summary>
    public static (double Amps, double Kelvin) Difference(string python)
    {
        var mains = new Mains(120, 60);
        var bank = Bank.Parse("25 W", mains);
        var simulation = new CircuitSimulation(mains, bank, Unit.Parse("motor 60 W", mains), 40);
        var ours = simulation.Run(Seconds);
        var theirs = Run(python, Script(mains, bank.Lamps[0].Filament!)).Split(' ').Select(text => double.Parse(text, CultureInfo.InvariantCulture)).ToArray();
        return (ours / theirs[0] - 1, simulation.FilamentKelvin[0] / theirs[1] - 1);
    }

    // The circuit written down a second time, in another language: motor shares as MotorUnit states them.
    private static string Script(Mains mains, Filament filament)
    {
        var kelvin = Enumerable.Range(0, 681).Select(step => 250 + 5.0 * step).ToArray();
        return string.Create(CultureInfo.InvariantCulture, $$"""
            import numpy as np
            from scipy.integrate import solve_ivp
            T = np.array([{{Join(kelvin, value => value)}}])
            R = np.array([{{Join(kelvin, filament.Ohms)}}])
            P = np.array([{{Join(kelvin, filament.LossWatts)}}])
            C = np.array([{{Join(kelvin, filament.HeatJoulesPerKelvin)}}])
            w = 2 * np.pi * {{mains.Hertz}}
            base = {{mains.Volts}}**2 / 60
            r1, l1, lm, r2, l2 = 0.055*base, 0.055*base/w, 0.85*base/w, 0.05*base, 0.055*base/w
            def rates(t, y):
                i1, i2, kelvin, q = y
                lamp = np.interp(kelvin, T, R)
                v = np.sqrt(2) * {{mains.Volts}} * np.sin(w*t + np.radians(40))
                over = v - (lamp + r1) * i1
                gap = (lm/l1*over + lm/l2*r2*i2) / (1 + lm/l1 + lm/l2)
                return [(over - gap)/l1, (gap - r2*i2)/l2, (i1*i1*lamp - np.interp(kelvin, T, P))/np.interp(kelvin, T, C), i1*i1]
            s = solve_ivp(rates, [0, {{Seconds}}], [0, 0, {{filament.AmbientKelvin}}, 0], method='Radau', rtol=1e-7, atol=1e-9, max_step=1e-3)
            print(np.sqrt(s.y[3, -1]/{{Seconds}}), s.y[2, -1])
            """);
    }

    private static string Join(double[] kelvin, Func<double, double> value) =>
        string.Join(",", kelvin.Select(at => value(at).ToString("R", CultureInfo.InvariantCulture)));

    private static bool HasScipy(string python)
    {
        using var process = Process.Start(new ProcessStartInfo(python, ["-c", "import scipy"]) { RedirectStandardError = true })!;
        process.StandardError.ReadToEnd();
        process.WaitForExit();
        return process.ExitCode == 0;
    }

    private static string Run(string python, string script)
    {
        using var process = Process.Start(new ProcessStartInfo(python, ["-"])
        {
            RedirectStandardInput = true,
            RedirectStandardOutput = true,
            RedirectStandardError = true,
            StandardInputEncoding = new UTF8Encoding(false),
        })!;
        process.StandardInput.Write(script);
        process.StandardInput.Close();
        var error = process.StandardError.ReadToEndAsync();
        var output = process.StandardOutput.ReadToEnd();
        process.WaitForExit();
        return process.ExitCode == 0 ? output.Trim() : throw new InvalidOperationException($"scipy failed: {error.Result}");
    }
}
