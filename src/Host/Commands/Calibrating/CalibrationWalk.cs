using System.Globalization;
using Lampwarden.Acquisition;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Commands.Calibrating;

/// <summary>Asks for a lamp's measurements step by step; each may be typed, read by meter with Enter, or left out with a hyphen.</summary>
/// <param name="input">What the technician types.</param>
/// <param name="prose">What they read.</param>
/// <param name="lineMeter">The bench's current meter.</param>
/// <param name="mainsMeter">Its mains meter; null where it has none.</param>
/// <param name="mainsVolts">Nominal mains.</param>
internal sealed class CalibrationWalk(TextReader input, TextWriter prose, MeterOptions lineMeter, MeterOptions? mainsMeter, double mainsVolts)
{
    private static readonly TimeSpan FilamentSettles = TimeSpan.FromSeconds(2);

    /// <summary>Walks through one lamp.</summary>
    /// <exception cref="BadInputException">The input ended before the walk did.</exception>
    public async Task<LampCalibrationOptions> AskAsync(LampOptions lamp, CancellationToken cancellation)
    {
        var measured = new LampCalibrationOptions();
        prose.WriteLine(string.Create(CultureInfo.InvariantCulture, $"Lamp {lamp.Name}, {lamp.RatedWatts} W {lamp.RatedVolts} V. A hyphen leaves a value as it was."));
        prose.WriteLine("1. Pull the limiter's plug. The lamp must have been off for ten minutes. Leave only this lamp in, and measure across it.");
        measured.RoomCelsius = await AskAsync("   Room temperature in degrees Celsius", measured.RoomCelsius, null, cancellation) ?? measured.RoomCelsius;
        var ohmmeter = MeterProbe.AsOhmmeter(lineMeter);
        measured.ColdOhms = await AskAsync("   Cold resistance in ohms", null, ohmmeter is null ? null : () => MeterProbe.ReadAsync(ohmmeter, TimeSpan.Zero, cancellation), cancellation);
        if (measured.ColdOhms is { } ohms)
        {
            measured.ColdOhms = ohms - (await AskAsync("   Resistance of the test leads held together, in ohms", 0, null, cancellation) ?? 0);
        }

        prose.WriteLine("2. Put the meter in the line, short the limiter's output, stand clear, switch on and wait two seconds. The lamp lights fully.");
        prose.WriteLine("   " + CommandLine.Cautions);
        measured.ShortedAmps = await AskAsync("   Line current in amperes", null, () => MeterProbe.ReadAsync(lineMeter, FilamentSettles, cancellation), cancellation);
        if (measured.ShortedAmps is not null)
        {
            measured.ShortedVolts = await AskAsync("   Mains in volts at that time", mainsMeter is null ? mainsVolts : null,
                mainsMeter is null ? null : () => MeterProbe.ReadAsync(mainsMeter, TimeSpan.Zero, cancellation), cancellation);
        }

        prose.WriteLine("3. Worth having, not needed: the lamp dim, with a resistor as the unit, so that 5 to 20 % of the rated volts stand across the lamp.");
        measured.DimVolts = await AskAsync("   Volts across the lamp, or a hyphen", null, null, cancellation);
        if (measured.DimVolts is not null)
        {
            measured.DimAmps = await AskAsync("   Line current in amperes", null, () => MeterProbe.ReadAsync(lineMeter, FilamentSettles, cancellation), cancellation);
        }

        return measured;
    }

    private async Task<double?> AskAsync(string question, double? otherwise, Func<Task<double>>? byMeter, CancellationToken cancellation)
    {
        while (true)
        {
            prose.Write(question + (byMeter is not null ? " [Enter: read it by meter]: "
                : otherwise is { } value ? string.Create(CultureInfo.InvariantCulture, $" [{value}]: ") : ": "));
            var answer = (await input.ReadLineAsync(cancellation) ?? throw new BadInputException("The answers ended before the calibration did; nothing was written.")).Trim();
            if (answer == "-")
            {
                return null;
            }

            if (answer.Length == 0 && byMeter is null && otherwise is not null)
            {
                return otherwise;
            }

            if (answer.Length > 0 && double.TryParse(answer, NumberStyles.Float, CultureInfo.InvariantCulture, out var typed) && double.IsFinite(typed))
            {
                return typed;
            }

            if (answer.Length == 0 && byMeter is not null)
            {
                try
                {
                    var read = await byMeter();
                    prose.WriteLine(string.Create(CultureInfo.InvariantCulture, $"   The meter says {read:0.######}."));
                    return read;
                }
                catch (IOException trouble)
                {
                    prose.WriteLine($"   {trouble.Message}. Type the value, or try again.");
                    continue;
                }
            }

            prose.WriteLine("   A number with a decimal point, please, or a hyphen to leave it out.");
        }
    }
}
