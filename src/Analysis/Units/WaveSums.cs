namespace Lampwarden.Analysis.Units;

/// <summary>Integrals over a cycle, from which its RMS values and means come. Weights are in any unit of time.</summary>
/// <param name="knownDirectAmps">Mean of the current from an earlier run over the same instants; 0 where there is none.</param>
internal struct WaveSums(double knownDirectAmps)
{
    private readonly double knownDirect = knownDirectAmps;
    private double squares;
    private double voltSquares;
    private double power;
    private double direct;
    private double absolute;
    private double deviation;
    private double peak;
    private double time;

    /// <summary>Adds an instant: line current and volts across the unit.</summary>
    public void Add(double amps, double volts, double weight = 1)
    {
        squares += weight * amps * amps;
        voltSquares += weight * volts * volts;
        power += weight * amps * volts;
        direct += weight * amps;
        absolute += weight * Math.Abs(amps);
        deviation += weight * Math.Abs(amps - knownDirect);
        peak = Math.Max(peak, Math.Abs(amps));
        time += weight;
    }

    /// <summary>Adds a stretch without current: the unit has the whole sinusoid across it.</summary>
    /// <param name="peakVolts">Of the source.</param>
    /// <param name="from">Angle in radians.</param>
    /// <param name="to">Angle in radians.</param>
    /// <param name="weightPerRadian">Weight of one radian.</param>
    public void AddIdle(double peakVolts, double from, double to, double weightPerRadian)
    {
        var span = to - from;
        voltSquares += weightPerRadian * peakVolts * peakVolts * (0.5 * span - 0.25 * (Math.Sin(2 * to) - Math.Sin(2 * from)));
        deviation += weightPerRadian * span * Math.Abs(knownDirect);
        time += weightPerRadian * span;
    }

    /// <summary>The point these instants make.</summary>
    /// <param name="mirrored">The instants are half a cycle and the other half is their mirror image: no direct part.</param>
    public readonly UnitPoint Point(bool mirrored) => new(
        Math.Sqrt(squares / time),
        Math.Sqrt(voltSquares / time),
        power / time,
        mirrored ? 0 : direct / time,
        absolute / time,
        deviation / time,
        peak);
}
