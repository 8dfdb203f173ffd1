namespace Lampwarden.Analysis.Watching;

/// <summary>One look at the bench: what the meters showed at one instant, in the order it was read.</summary>
/// <param name="Seconds">Seconds since the run began, never decreasing.</param>
/// <param name="LineAmps">
/// Line current in amperes. <see cref="double.NaN"/> says that no reading came (a gap);
/// <see cref="double.PositiveInfinity"/> says that the meter was overloaded.
/// </param>
/// <param name="MainsVolts">Mains in volts; <see cref="double.NaN"/> where it is not measured.</param>
public readonly record struct Observation(double Seconds, double LineAmps, double MainsVolts = double.NaN)
{
    /// <summary>No reading came at this instant.</summary>
    public bool IsGap => double.IsNaN(LineAmps);

    /// <summary>The meter answered that the current was beyond its range.</summary>
    public bool IsOverload => double.IsPositiveInfinity(LineAmps);
}
