namespace Lampwarden.Analysis.Uncertainty;

/// <summary>
/// The law of propagation of uncertainty (JCGM 100, 5.1.2) for one output, with the first higher-order terms (5.1.2, note): inputs are moved
/// one at a time by one standard uncertainty to either side; the differences give slope, shift of the mean and skew. Positive quantities are
/// worked as logarithms: what acts on them here acts by factors, so the logarithm is straighter.
/// </summary>
internal struct Propagation
{
    private readonly double nominal;
    private readonly bool isLog;
    private double mean;
    private double slopeSquares;
    private double bends;
    private double thirdMoment;
    private double rectangleFourth;

    /// <param name="nominal">The output with every input at its nominal value.</param>
    /// <param name="isLinear">Never to work in logarithms: for a sum that may come near zero.</param>
    public Propagation(double nominal, bool isLinear = false)
    {
        isLog = nominal > 0 && !isLinear;
        this.nominal = isLog ? Math.Log(nominal) : nominal;
        mean = this.nominal;
    }

    /// <summary>Adds one independent input.</summary>
    /// <param name="input">Its distribution.</param>
    /// <param name="above">The output with the input at its mean plus one sigma.</param>
    /// <param name="below">The output with the input at its mean minus one sigma.</param>
    public void Add(in UncertainInput input, double above, double below)
    {
        if (input.Sigma == 0)
        {
            return;
        }

        if (isLog)
        {
            (above, below) = (Math.Log(above), Math.Log(below));
        }

        // With z standardised, y = centre + slope z + bend z^2; as z^2 is 1 at both points and 1 in the mean, their average is the mean.
        var slope = 0.5 * (above - below);
        var average = 0.5 * (above + below);
        var offset = (input.Nominal - input.Mean) / input.Sigma;
        var bend = Math.Abs(offset * offset - 1) > 0.1 ? (nominal - average - slope * offset) / (offset * offset - 1) : 0;
        mean += average - nominal;
        slopeSquares += slope * slope;
        bends += bend;
        thirdMoment += 6 * slope * slope * bend;
        rectangleFourth += input.Shape == InputShape.Rectangular ? Math.Pow(slope, 4) : 0;
    }

    /// <summary>Combined standard uncertainty: of the logarithm, so relative, for a positive quantity.</summary>
    public readonly double Sigma => Math.Sqrt(Variance);

    // The mixed second derivatives are not worked out. They are taken as if the output bent over one combination of all inputs, as it does
    // over the volts of a lamp: then the bends add, and not their squares.
    private readonly double Variance => slopeSquares + 2 * bends * bends;

    /// <summary>The 95 % interval.</summary>
    public readonly Interval Interval
    {
        get
        {
            if (double.IsNaN(mean) || double.IsNaN(Variance))
            {
                return Interval.Unknown;
            }

            if (Variance <= 0)
            {
                return Back(mean, mean);
            }

            var sigma = Sigma;
            var factor = CoverageFactor.Of(Math.Pow(rectangleFourth, 0.25) / sigma);

            // The skew moves both ends the same way (first term of Cornish and Fisher).
            var skew = Math.Clamp(thirdMoment / (sigma * sigma * sigma), -1, 1);
            var shift = mean + skew * (factor * factor - 1) / 6 * sigma;
            return Back(shift - factor * sigma, shift + factor * sigma);
        }
    }

    private readonly Interval Back(double low, double high) => isLog ? new Interval(Math.Exp(low), Math.Exp(high)) : new Interval(low, high);
}
