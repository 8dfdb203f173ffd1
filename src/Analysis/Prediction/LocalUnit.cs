using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Prediction;

/// <summary>
/// A unit near one operating point: amperes, volts and watts as power laws of source volts, series resistance and the unit's rating,
/// taken from a few exact solutions. Makes the propagation of uncertainties through a costly unit cheap; exact at the point itself.
/// </summary>
internal sealed class LocalUnit
{
    private const double Delta = 0.02;

    private readonly UnitPoint centre;
    private readonly double centreVolts;
    private readonly double centreOhms;
    private readonly double[] byVolts;
    private readonly double[] byOhms;
    private readonly double[] byRating;

    public LocalUnit(Unit unit, Lamps.Mains mains, UnitResponse response, double volts, double seriesOhms, in UnitPoint point, bool withRating)
    {
        (centre, centreVolts, centreOhms) = (point, volts, seriesOhms);
        var up = Math.Exp(Delta);
        byVolts = Slopes(response.At(volts * up, seriesOhms), response.At(volts / up, seriesOhms));
        byOhms = Slopes(response.At(volts, seriesOhms * up), response.At(volts, seriesOhms / up));
        byRating = withRating
            ? Slopes(Like(response, unit.Scaled(up).NewResponse(mains)).At(volts, seriesOhms), Like(response, unit.Scaled(1 / up).NewResponse(mains)).At(volts, seriesOhms))
            : [0, 0, 0];
    }

    /// <summary>The point at other volts, resistance and rating (a factor).</summary>
    public UnitPoint At(double volts, double seriesOhms, double rating)
    {
        var (v, r, w) = (Math.Log(volts / centreVolts), Math.Log(seriesOhms / centreOhms), Math.Log(rating));
        double Factor(int index) => Math.Exp(byVolts[index] * v + byOhms[index] * r + byRating[index] * w);
        var amps = Factor(0);
        return centre with
        {
            Amps = centre.Amps * amps,
            Volts = centre.Volts * Factor(1),
            Watts = centre.Watts * Factor(2),
            DirectAmps = centre.DirectAmps * amps,
            MeanAbsoluteAmps = centre.MeanAbsoluteAmps * amps,
            MeanDeviationAmps = centre.MeanDeviationAmps * amps,
            PeakAmps = centre.PeakAmps * amps,
        };
    }

    /// <summary>The rating (a factor) at which the unit lets this current through.</summary>
    public double RatingOf(double volts, double seriesOhms, double amps) => Math.Exp(
        (Math.Log(amps / centre.Amps) - byVolts[0] * Math.Log(volts / centreVolts) - byOhms[0] * Math.Log(seriesOhms / centreOhms)) / byRating[0]);

    // A locked motor's neighbour is locked too.
    private static UnitResponse Like(UnitResponse original, UnitResponse next)
    {
        if (original is MotorResponse { IsLocked: true } && next is MotorResponse motor)
        {
            motor.IsLocked = true;
        }

        return next;
    }

    private static double[] Slopes(in UnitPoint above, in UnitPoint below) =>
        [Slope(above.Amps, below.Amps), Slope(above.Volts, below.Volts), Slope(above.Watts, below.Watts)];

    private static double Slope(double above, double below) => above > 0 && below > 0 ? Math.Log(above / below) / (2 * Delta) : 0;
}
