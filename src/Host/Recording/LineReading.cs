namespace Lampwarden.Host.Recording;

/// <summary>
/// One entry of a run's stream, in exactly the form the store gives back: milliseconds in time, and a number that is
/// the nearest double to the decimal the meter sent. Feed the watch from this form and a stored run replays bit for bit.
/// </summary>
public readonly record struct LineReading
{
    private const int MostDecimals = 12;
    private const double LargestMantissa = 1e15;

    private static readonly double[] PowersOfTen = [1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12];

    /// <summary>Makes an entry.</summary>
    /// <param name="seconds">Seconds since the run began; rounded to a millisecond.</param>
    /// <param name="amps">Line current in A; NaN: no reading came; positive infinity: the meter was overloaded.</param>
    /// <param name="decimals">Decimal places of <paramref name="amps"/> as sent, in A; -1 finds the fewest that hold it exactly.</param>
    /// <param name="mainsVolts">Mains in V; NaN where it is not measured.</param>
    /// <param name="voltsDecimals">Decimal places of <paramref name="mainsVolts"/> as sent; -1 as above.</param>
    public LineReading(double seconds, double amps, int decimals = -1, double mainsVolts = double.NaN, int voltsDecimals = -1)
    {
        Milliseconds = (long)Math.Round(seconds * 1000);
        (Amps, Decimals) = Exact(amps, decimals);
        (MainsVolts, VoltsDecimals) = Exact(mainsVolts, voltsDecimals);
    }

    private LineReading(long milliseconds, double amps, int decimals, double mainsVolts, int voltsDecimals) =>
        (Milliseconds, Amps, Decimals, MainsVolts, VoltsDecimals) = (milliseconds, amps, decimals, mainsVolts, voltsDecimals);

    /// <summary>Milliseconds since the run began.</summary>
    public long Milliseconds { get; }

    /// <summary>Seconds since the run began: the nearest double to a whole number of milliseconds.</summary>
    public double Seconds => Milliseconds / 1000.0;

    /// <summary>Line current in A; NaN for a missed poll, positive infinity for an overload.</summary>
    public double Amps { get; }

    /// <summary>Decimal places of <see cref="Amps"/> as sent; -1: none of 0 to 12 holds it exactly, and it is kept as a raw double.</summary>
    public int Decimals { get; }

    /// <summary>Mains in V; NaN where it is not measured.</summary>
    public double MainsVolts { get; }

    /// <summary>Decimal places of <see cref="MainsVolts"/>, as for <see cref="Decimals"/>.</summary>
    public int VoltsDecimals { get; }

    /// <summary>No reading came at this instant.</summary>
    public bool IsMissing => double.IsNaN(Amps);

    /// <summary>The meter answered that the current was beyond its range.</summary>
    public bool IsOverload => double.IsPositiveInfinity(Amps);

    /// <summary>An entry known to be in stored form already: no rounding, no search.</summary>
    internal static LineReading Stored(long milliseconds, double amps, int decimals, double mainsVolts, int voltsDecimals) =>
        new(milliseconds, amps, decimals, mainsVolts, voltsDecimals);

    internal static double PowerOfTen(int decimals) => PowersOfTen[decimals];

    internal static double Rebuild(long mantissa, int decimals) => mantissa / PowersOfTen[decimals];

    internal static long Mantissa(double value, int decimals) => (long)Math.Round(value * PowersOfTen[decimals]);

    // mantissa / 10^d is one correctly rounded division of two exactly held numbers, so it is the nearest double to the
    // decimal, as a parser's answer is. A milliampere answer scaled to A may be one bit off that: it is put right here.
    private static (double Value, int Decimals) Exact(double value, int decimals)
    {
        if (!double.IsFinite(value))
        {
            return (value, 0);
        }

        if (decimals is >= 0 and <= MostDecimals && Math.Abs(value) * PowersOfTen[decimals] < LargestMantissa)
        {
            var nearest = Rebuild(Mantissa(value, decimals), decimals);
            if (Math.Abs(nearest - value) <= 1e-14 * Math.Abs(value))
            {
                return (nearest, decimals);
            }
        }

        for (var places = 0; places <= MostDecimals && Math.Abs(value) * PowersOfTen[places] < LargestMantissa; places++)
        {
            if (Rebuild(Mantissa(value, places), places) == value)
            {
                return (Rebuild(Mantissa(value, places), places), places);
            }
        }

        return (value, -1);
    }
}
