namespace Lampwarden.Analysis.Uncertainty;

/// <summary>Where a quantity lies with 95 % probability; NaN at both ends where that cannot be said.</summary>
public readonly record struct Interval(double Low, double High)
{
    /// <summary>No statement.</summary>
    public static Interval Unknown { get; } = new(double.NaN, double.NaN);

    /// <summary>True where a value lies inside, ends included.</summary>
    public bool Contains(double value) => value >= Low && value <= High;

    /// <summary>The part of this interval between two bounds that the quantity cannot pass.</summary>
    public Interval Within(double least, double most) => new(Math.Clamp(Low, least, most), Math.Clamp(High, least, most));
}
