namespace Lampwarden.Analysis.Units;

/// <summary>Sums over the instants of a cycle, from which its RMS values and means come.</summary>
/// <param name="knownDirectAmps">Mean of the current from an earlier run over the same instants; 0 where there is none.</param>
internal struct WaveSums(double knownDirectAmps)
{
    private readonly double knownDirect = knownDirectAmps;
    private double deviation;
    private double squares;
    private double voltSquares;
    private double power;
    private double direct;
    private double absolute;
    private double peak;
    private int count;

    /// <summary>Adds an instant: line current and volts across the unit.</summary>
    public void Add(double amps, double volts)
    {
        squares += amps * amps;
        voltSquares += volts * volts;
        power += amps * volts;
        direct += amps;
        absolute += Math.Abs(amps);
        peak = Math.Max(peak, Math.Abs(amps));
        deviation += Math.Abs(amps - knownDirect);
        count++;
    }

    /// <summary>The point these instants make.</summary>
    /// <param name="mirrored">The instants are half a cycle and the other half is their mirror image: no direct part.</param>
    public readonly UnitPoint Point(bool mirrored) => new(
        Math.Sqrt(squares / count), Math.Sqrt(voltSquares / count), power / count, mirrored ? 0 : direct / count, absolute / count, deviation / count, peak);
}
