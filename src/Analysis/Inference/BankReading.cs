using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;

namespace Lampwarden.Analysis.Inference;

/// <summary>
/// What a bank does at a line current that was read: volts across it, and how each lamp stands. The current alone decides,
/// whatever the unit is. Starts from its last answer, so not thread-safe.
/// </summary>
public sealed class BankReading(Bank bank)
{
    private readonly BankSolver _solver = new(bank);

    /// <summary>RMS volts across the bank at a settled current.</summary>
    /// <param name="lineAmps">RMS, 0 or more.</param>
    public double Volts(double lineAmps) => lineAmps > 0 ? _solver.Carry(lineAmps) : 0;

    /// <summary>Slope dV/dI of the bank in ohms at the last answer.</summary>
    public double SlopeOhms => _solver.SlopeOhms;

    /// <summary>Every lamp at a settled current, in the order of the bank's text.</summary>
    /// <param name="lineAmps">RMS, 0 or more.</param>
    public IReadOnlyList<LampState> Lamps(double lineAmps)
    {
        Volts(lineAmps);
        return [.. bank.Lamps.Select((lamp, index) =>
        {
            var (volts, amps) = lineAmps > 0 ? (_solver.LampVolts[index], _solver.LampAmps[index]) : (0, 0);
            var kelvin = lineAmps > 0 ? _solver.Kelvin(index) : lamp.Filament?.AmbientKelvin ?? double.NaN;
            return new LampState(lamp.Name, volts, amps, volts * amps, kelvin, lamp.Glow(kelvin), double.NaN);
        })];
    }
}
