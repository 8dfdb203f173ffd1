namespace Lampwarden.Analysis.Watching;

/// <summary>Shapes a slow fault may take in time.</summary>
internal enum FaultShape
{
    Ramp,
    QuickGrowth,
    SlowGrowth,
    Step,
}

/// <summary>
/// Generalised likelihood ratio of faults that add to the current (Willsky and Jones 1976): for every onset kept and every shape, how the
/// fault would have come through the healthy model's filter is followed exactly, so that the best size, its doubt and its likelihood come
/// out in closed form. Onsets are kept dense in the near past and thinner, in proportion to their age, further back.
/// </summary>
internal sealed class FaultScores
{
    public const int Shapes = 4;
    private const int Capacity = 48;
    private const double SpacingShare = 0.2;
    private const int Row = HealthyModel.Size;

    private readonly float[] shift = new float[Capacity * Shapes * Row];
    private readonly double[] score = new double[Capacity * Shapes];
    private readonly double[] information = new double[Capacity * Shapes];
    private readonly double[] onset = new double[Capacity];
    private int count;

    public int Count => count;

    public double Onset(int candidate) => onset[candidate];

    /// <summary>Relative excess of a fault of unit size, u seconds after onset: ramps per hour, growth from a seed, steps at once.</summary>
    public static double Unit(FaultShape shape, double u) => u <= 0 ? 0 : shape switch
    {
        FaultShape.Ramp => u / 3600,
        FaultShape.QuickGrowth => Math.Exp(Math.Min(u / GrowthTau(shape), 12)) - 1,
        FaultShape.SlowGrowth => Math.Exp(Math.Min(u / GrowthTau(shape), 12)) - 1,
        _ => 1,
    };

    public static double GrowthTau(FaultShape shape) => shape == FaultShape.QuickGrowth ? 600 : 1800;

    /// <summary>Estimated size and its sd for one onset and shape.</summary>
    public (double Size, double Sd) Size(int candidate, FaultShape shape)
    {
        var at = (candidate * Shapes) + (int)shape;
        return information[at] <= 0 ? (0, double.PositiveInfinity) : (score[at] / information[at], 1 / Math.Sqrt(information[at]));
    }

    /// <summary>Twice... the log likelihood ratio of the best size within limits (of one sign) against no fault.</summary>
    public double Ratio(int candidate, FaultShape shape, double least, double most)
    {
        var at = (candidate * Shapes) + (int)shape;
        if (information[at] <= 0)
        {
            return 0;
        }

        var size = Math.Clamp(score[at] / information[at], least, most);
        return (size * score[at]) - (size * size * information[at] / 2);
    }

    public void Clear() => count = 0;

    /// <summary>Weighs the block the model has just compared and learned; the block spans up to <paramref name="seconds"/>, its middle lies half a block before.</summary>
    public void Weigh(HealthyModel model, double mains, double from, double middle)
    {
        for (var c = 0; c < count; c++)
        {
            for (var s = 0; s < Shapes; s++)
            {
                var at = (c * Shapes) + s;
                var moved = shift.AsSpan(at * Row, Row);
                model.Carry(moved);
                var left = Unit((FaultShape)s, middle - onset[c]) - model.Seen(moved, mains);
                score[at] += left * model.Surprise / model.SurpriseVariance;
                information[at] += left * left / model.SurpriseVariance;
                model.Absorb(moved, left);
            }
        }

        Open(from + (2 * (middle - from)));
    }

    /// <summary>Opens a new onset at the end of the block and thins the old ones.</summary>
    private void Open(double seconds)
    {
        if (count == Capacity)
        {
            for (var share = SpacingShare; count == Capacity && share < 10; share *= 1.3)
            {
                Thin(seconds, share);
            }

            // Only a clock that stands still leaves them all so young: then the newest gives way.
            count -= count == Capacity ? 1 : 0;
        }

        onset[count] = seconds;
        score.AsSpan(count * Shapes, Shapes).Clear();
        information.AsSpan(count * Shapes, Shapes).Clear();
        shift.AsSpan(count * Shapes * Row, Shapes * Row).Clear();
        count++;
    }

    /// <summary>Drops every onset whose neighbours stand closer together than a share of their age.</summary>
    private void Thin(double seconds, double share)
    {
        var kept = 1;
        for (var c = 1; c < count; c++)
        {
            var next = c + 1 < count ? onset[c + 1] : seconds;
            if (c + 1 < count && next - onset[kept - 1] < share * (seconds - onset[c]))
            {
                continue;
            }

            Move(c, kept++);
        }

        count = kept;
    }

    private void Move(int from, int to)
    {
        if (from == to)
        {
            return;
        }

        onset[to] = onset[from];
        score.AsSpan(from * Shapes, Shapes).CopyTo(score.AsSpan(to * Shapes));
        information.AsSpan(from * Shapes, Shapes).CopyTo(information.AsSpan(to * Shapes));
        shift.AsSpan(from * Shapes * Row, Shapes * Row).CopyTo(shift.AsSpan(to * Shapes * Row));
    }

    public void Transfer(StateStream state)
    {
        state.Field(ref count);
        state.Fields(onset.AsSpan(0, count));
        state.Fields(score.AsSpan(0, count * Shapes));
        state.Fields(information.AsSpan(0, count * Shapes));
        state.Fields(shift.AsSpan(0, count * Shapes * Row));
    }
}
