namespace Lampwarden.Analysis.Checks;

/// <summary>One figure of ours beside one from outside the project.</summary>
/// <param name="Group">What it is about.</param>
/// <param name="What">The quantity.</param>
/// <param name="Source">Where the other figure stands.</param>
/// <param name="Published">The other figure; NaN where only a difference is given.</param>
/// <param name="Ours">Ours.</param>
/// <param name="Residual">Relative difference, or an RMS of relative differences.</param>
/// <param name="Within">What it is held to; NaN where it is shown and not held, because the source is too rough.</param>
public sealed record ExternalCheck(string Group, string What, string Source, double Published, double Ours, double Residual, double Within)
{
    /// <summary>A figure against a figure.</summary>
    public static ExternalCheck Of(string group, string what, string source, double published, double ours, double within) =>
        new(group, what, source, published, ours, ours / published - 1, within);

    /// <summary>True unless it is held to a tolerance and beyond it.</summary>
    public bool Holds => double.IsNaN(Within) || Math.Abs(Residual) <= Within;
}
