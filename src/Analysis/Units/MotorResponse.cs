namespace Lampwarden.Analysis.Units;

/// <summary>A motor's steady state at a constant resistance: running where its torque meets the load's, or locked.</summary>
internal sealed class MotorResponse(MotorUnit unit) : UnitResponse
{
    private const int Scan = 100;

    /// <summary>Set for a motor that never got going: its slip is one.</summary>
    public bool IsLocked { get; set; }

    public override UnitPoint At(double volts, double seriesOhms) => unit.Solve(volts, seriesOhms, IsLocked ? 1 : RunningSlip(volts, seriesOhms), out _);

    // The smallest slip at which torque and load are equal; 1 where the motor has no such point and would stop.
    private double RunningSlip(double volts, double seriesOhms)
    {
        var last = 0.02;
        for (var index = 1; index <= Scan; index++)
        {
            var slip = 0.02 + 0.98 * index / Scan;
            if (Surplus(slip) >= 0)
            {
                for (var halving = 0; halving < 40; halving++)
                {
                    var middle = 0.5 * (last + slip);
                    (last, slip) = Surplus(middle) >= 0 ? (last, middle) : (middle, slip);
                }

                return slip;
            }

            last = slip;
        }

        return 1;

        double Surplus(double slip)
        {
            unit.Solve(volts, seriesOhms, slip, out var torque);
            return torque - unit.LoadTorque(1 - slip);
        }
    }
}
