using System.CommandLine;
using System.Globalization;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;
using Lampwarden.Host.Soaking;

namespace Lampwarden.Host.Commands;

/// <summary><c>predict</c>: what should happen for one bank and one unit.</summary>
internal sealed class PredictCommand : CliCommand
{
    private readonly Option<string> _mains = CommonOptions.Mains();
    private readonly Option<string> _bank = new("--bank") { Description = "Bank, such as \"75 W || 25 W\"", HelpName = "B", Required = true };
    private readonly Option<string> _unit = new("--unit") { Description = "Unit, such as \"resistor 300 ohm\"", HelpName = "U", Required = true };
    private readonly Option<double> _window = new("--meter-window") { Description = "The meter's window in seconds", HelpName = "S", DefaultValueFactory = _ => 0.2 };
    private readonly Option<string> _coupling = new("--meter-coupling")
    {
        Description = "Whether the meter sees direct current: ac (it does not) or ac+dc",
        HelpName = "ac|ac+dc",
        DefaultValueFactory = _ => "ac+dc",
    };

    private readonly Option<string> _response = new("--meter-response")
    {
        Description = "How the meter makes its number: true-rms or mean",
        HelpName = "true-rms|mean",
        DefaultValueFactory = _ => "true-rms",
    };

    private readonly Option<string?> _picture = new("--picture") { Description = "Draw one sheet for the wall into this file", HelpName = "F.svg|F.png" };
    private readonly Option<string?> _config = new("--config") { Description = "Configuration whose lamp inventory the bank may name", HelpName = "F" };

    public PredictCommand()
        : base("predict", "Predict the inrush, the steady current and the short for one bank and one unit")
    {
        Add(_mains);
        Add(_bank);
        Add(_unit);
        Add(_window);
        Add(_coupling);
        Add(_response);
        Add(_picture);
        Add(_config);
    }

    protected override Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var window = parsed.GetValue(_window);
        if (window is not (>= 0.001 and <= 10))
        {
            throw new BadInputException(string.Create(CultureInfo.InvariantCulture, $"--meter-window is {window}; expected 0.001 to 10 seconds."));
        }

        var inventory = parsed.GetValue(_config) is { } file ? Inventory.Of(Configuration.ConfigurationFile.Load(file).Lamps) : LampInventory.Empty;
        var mains = Mains.Parse(parsed.GetValue(_mains)!);
        var bank = Bank.Parse(parsed.GetValue(_bank)!, mains, inventory);
        var unit = Unit.Parse(parsed.GetValue(_unit)!, mains);
        var settings = new PredictionSettings
        {
            Meter = new PredictedMeter { WindowSeconds = window, Coupling = Coupling(parsed.GetValue(_coupling)!), Response = Response(parsed.GetValue(_response)!) },
        };
        if (parsed.GetValue(_picture) is { } picture)
        {
            new Picturing.PredictionPicture(mains, bank, unit, settings).Save(picture);
            terminal.Error.WriteLine($"Picture written to {picture}");
        }

        var prediction = Predictor.Predict(mains, bank, unit, settings);
        if (terminal.WantsJson)
        {
            terminal.WriteJson(prediction);
        }
        else
        {
            Tell(terminal.Prose, prediction);
        }

        return Task.FromResult(prediction.Steady.Exists ? ExitCode.Done : ExitCode.No);
    }

    private static MeterCoupling Coupling(string text) => text switch
    {
        "ac" => MeterCoupling.Ac,
        "ac+dc" => MeterCoupling.AcDc,
        _ => throw new BadInputException($"--meter-coupling is '{text}'; expected ac or ac+dc."),
    };

    private static MeterResponse Response(string text) => text switch
    {
        "true-rms" => MeterResponse.TrueRms,
        "mean" => MeterResponse.MeanResponding,
        _ => throw new BadInputException($"--meter-response is '{text}'; expected true-rms or mean."),
    };

    private static void Tell(TextWriter prose, BenchPrediction it)
    {
        prose.WriteLine($"{it.Unit.Text} behind {it.Bank.Text} at {it.Mains}");
        foreach (var note in it.Notes)
        {
            prose.WriteLine("  " + note);
        }

        if (it.Steady.Exists)
        {
            Line("steady", string.Create(CultureInfo.InvariantCulture, $"{Narration.Amps(it.Steady.LineAmps)}; the unit gets {it.Steady.UnitVolts:0.0} V and {it.Steady.UnitWatts:0.0} W"));
            Line("meter should stay within", $"{Narration.Amps(it.Band.LowAmps)} to {Narration.Amps(it.Band.HighAmps)} ({it.Band.Coverage:P0})");
            Line("switch-on", string.Create(CultureInfo.InvariantCulture, $"peak {it.Inrush.PeakAmps:0.00} A, first reading up to {Narration.Amps(it.Inrush.FirstReadingAmps)}, within 10 % after {it.Inrush.SettleSeconds:0.00} s"));
        }

        Line("unit shorted", string.Create(CultureInfo.InvariantCulture, $"{Narration.Amps(it.Shorted.LineAmps)}, peak {it.Shorted.PeakAmps:0.00} A; contrast {it.Contrast:0.0}"));
        for (var index = 0; index < it.Shorted.Lamps.Count; index++)
        {
            var (healthy, shorted) = (it.Steady.Exists ? it.Steady.Lamps[index] : null, it.Shorted.Lamps[index]);
            Line("lamp " + shorted.Name, string.Create(CultureInfo.InvariantCulture,
                $"{(healthy is null ? "" : $"{healthy.Volts:0.0} V, {healthy.FilamentKelvin:0} K, glow {healthy.Glow:P1} healthy; ")}{shorted.Volts:0.0} V, {shorted.FilamentKelvin:0} K, glow {shorted.Glow:P0} shorted"));
        }

        prose.WriteLine(CommandLine.Cautions);

        void Line(string what, string value) => prose.WriteLine($"  {what,-26}{value}");
    }
}
