using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

public sealed partial class CircuitSimulation
{
    // Filaments settle in 30 ms at full volts; steps of a millisecond follow them without fuss.
    private const double EnvelopeStepSeconds = 0.001;

    // Slower than this, in kelvin per second, nothing that a meter could see is left to happen.
    private const double QuietKelvinPerSecond = 0.5;

    private Unit unitModel;
    private UnitResponse? response;

    /// <summary>True RMS line current at this instant in the quasi-steady view: filaments as warm as they are, everything electrical settled.</summary>
    public double EnvelopeAmps()
    {
        response ??= unitModel.NewResponse(mains);
        var amps = EnvelopeRates(kelvin, kelvinRates[0]);
        isFresh = false;
        return amps;
    }

    /// <summary>
    /// Goes on quickly by RMS values: filaments are followed, the waveform is not, and the unit's own slow states are taken as settled.
    /// For long soaks; costs nothing where all is quiet. Gives the RMS line current at the end of the time.
    /// </summary>
    /// <param name="seconds">How far, 0 or more; any length.</param>
    public double Coast(double seconds)
    {
        response ??= unitModel.NewResponse(mains);
        var left = seconds;
        while (left > 0)
        {
            var step = Math.Min(left, EnvelopeStepSeconds);
            EnvelopeRates(kelvin, kelvinRates[0]);
            var fastest = 0.0;
            for (var lamp = 0; lamp < kelvin.Length; lamp++)
            {
                fastest = Math.Max(fastest, Math.Abs(kelvinRates[0][lamp]));
                stageKelvin[lamp] = kelvin[lamp] + 0.5 * step * kelvinRates[0][lamp];
            }

            if (fastest < QuietKelvinPerSecond)
            {
                break;
            }

            EnvelopeRates(stageKelvin, kelvinRates[1]);
            for (var lamp = 0; lamp < kelvin.Length; lamp++)
            {
                kelvin[lamp] += step * kelvinRates[1][lamp];
            }

            left -= step;
        }

        // The waveform goes on from the phase it was left at.
        startSeconds = Seconds + seconds;
        startIndex = SineIndex(0);
        steps = 0;
        return EnvelopeAmps();
    }

    private double EnvelopeRates(double[] temperatures, double[] rates)
    {
        ReadFilaments(temperatures);
        var bankOhms = JoinOhms() + sourceOhms;
        double amps;
        if (double.IsPositiveInfinity(FaultOhms))
        {
            amps = response!.At(MainsVolts, Math.Max(bankOhms, 1e-6)).Amps;
        }
        else
        {
            // Taken as in phase with the unit's current: exact for a resistive unit.
            var divider = FaultOhms / (bankOhms + FaultOhms);
            var unitAmps = response!.At(MainsVolts * divider, Math.Max(bankOhms * divider, 1e-6)).Amps;
            amps = (MainsVolts + FaultOhms * unitAmps) / (bankOhms + FaultOhms);
        }

        HeatLamps(amps, rates);
        return amps;
    }
}
