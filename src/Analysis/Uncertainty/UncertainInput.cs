namespace Lampwarden.Analysis.Uncertainty;

/// <summary>One input of a model: its nominal value, where its true value is expected, and how far it may be off.</summary>
/// <param name="Name">For a table of contributions.</param>
/// <param name="Nominal">The value the estimate was made with.</param>
/// <param name="Mean">Centre of its distribution, which need not be the nominal value.</param>
/// <param name="Sigma">Standard uncertainty, 0 or more.</param>
/// <param name="Shape">Normal, or rectangular with half-width Sigma times the root of three.</param>
internal readonly record struct UncertainInput(string Name, double Nominal, double Mean, double Sigma, InputShape Shape)
{
    public static UncertainInput Normal(string name, double nominal, double sigma) => new(name, nominal, nominal, sigma, InputShape.Normal);

    public static UncertainInput Between(string name, double nominal, double low, double high) =>
        new(name, nominal, 0.5 * (low + high), (high - low) / Math.Sqrt(12), InputShape.Rectangular);

    /// <summary>A true value, given a random number evenly spread over 0 to 1.</summary>
    public double Draw(double uniform) => Shape == InputShape.Normal
        ? Mean + Sigma * MathNet.Numerics.Distributions.Normal.InvCDF(0, 1, uniform)
        : Mean + Sigma * Math.Sqrt(3) * (2 * uniform - 1);
}
