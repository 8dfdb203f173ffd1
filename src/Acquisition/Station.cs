using Lampwarden.Acquisition.Protocol;

namespace Lampwarden.Acquisition;

/// <summary>One quantity wanted from a wire: its options, where its events go, and when it is due.</summary>
internal sealed class Station
{
    private const double OffCounts = 5;
    private bool _off;

    public Station(MeterOptions options, EventOutlet outlet)
    {
        Options = options;
        Outlet = outlet;
        Reader = options.Protocol.Pattern.Length > 0 ? new LinePattern(options) : new ScpiAnswer(options.Protocol.Field);
        Schedule = new PollSchedule(outlet.Clock.Time, options.ReadingsPerSecond);
    }

    public MeterOptions Options { get; }

    public EventOutlet Outlet { get; }

    public HealthBook Health => Outlet.Health;

    /// <summary>Reads this station's value out of a line.</summary>
    public IValueReader Reader { get; }

    public PollSchedule Schedule { get; }

    /// <summary>
    /// A reading came: when the current has just risen from nothing, the next seconds are polled as fast as the meter answers,
    /// because inrush is over before two ordinary readings are in.
    /// </summary>
    public void Saw(double value)
    {
        var off = Math.Abs(value) <= OffCounts * Options.Accuracy.CountSize;
        if (_off && !off && Options.SwitchOnSeconds > 0 && Options.Quantity == Quantity.LineCurrent)
        {
            Schedule.HurryFor(TimeSpan.FromSeconds(Options.SwitchOnSeconds));
        }

        _off = off;
    }
}
