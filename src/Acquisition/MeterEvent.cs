namespace Lampwarden.Acquisition;

/// <summary>What a meter measures.</summary>
public enum Quantity
{
    LineCurrent,
    MainsVoltage,
}

/// <summary>What came of one poll, or of one line of a free-running meter.</summary>
public enum MeterEventKind
{
    /// <summary>A number in the meter's quantity, SI.</summary>
    Reading,

    /// <summary>The meter answered that the input is beyond its range.</summary>
    Overload,

    /// <summary>No reading, with the reason.</summary>
    Gap,
}

/// <summary>Why there is no reading. The written form (kebab-case) is stored and shown.</summary>
public enum GapReason
{
    None,

    /// <summary>The meter sent nothing within its time.</summary>
    NoAnswer,

    /// <summary>Bytes came, but no number could be read from them.</summary>
    NotANumber,

    /// <summary>A line longer than any meter's: thrown away to keep memory bounded.</summary>
    LineTooLong,

    /// <summary>The answer belongs to an earlier question, so it says nothing of now.</summary>
    StaleAnswer,

    /// <summary>The meter answered 9.91E37: not a number.</summary>
    MeterHasNoValue,

    /// <summary>The connection is gone; reopening is being tried.</summary>
    Disconnected,

    /// <summary>The port or host is not there.</summary>
    PortMissing,

    /// <summary>The system does not let this user open the port.</summary>
    PermissionDenied,

    /// <summary>Another program holds the port.</summary>
    PortBusy,

    /// <summary>The meter was switched off and on, or lost its setting; it is being set up again.</summary>
    MeterRestarted,

    /// <summary>The service itself was late and skipped polls rather than bunch them.</summary>
    Stalled,
}

/// <summary>A reading, an overload or a gap: exactly one for every poll, in order.</summary>
/// <param name="Kind">Which of the three.</param>
/// <param name="Sequence">Counts up from 0 within a session, without holes.</param>
/// <param name="Value">SI value of the quantity (A or V) for a reading; NaN otherwise.</param>
/// <param name="Utc">
/// Wall time at the arrival of the answer's first byte, or of the gap's end. It follows the computer's clock, steps included;
/// take intervals from <paramref name="ElapsedSeconds"/>.
/// </param>
/// <param name="ElapsedSeconds">The same instant on the monotonic clock, in seconds since the session began.</param>
/// <param name="LatencySeconds">From the question (or the line's start) to the end of the answer; NaN for a gap.</param>
/// <param name="Reason">Why there is no reading; <see cref="GapReason.None"/> for a reading.</param>
/// <param name="Detail">For a gap: what was seen (an excerpt of the bytes, the port's error); null for a reading; for an overload how it was told.</param>
/// <param name="Digits">For a reading: decimal places of the number as sent, in SI, so that a record can keep exactly what came; -1 unknown.</param>
/// <param name="WindowSeconds">Length of the meter's measuring window, which ended when the answer began; NaN for a gap.</param>
public readonly record struct MeterEvent(
    MeterEventKind Kind,
    long Sequence,
    double Value,
    DateTimeOffset Utc,
    double ElapsedSeconds,
    double LatencySeconds = double.NaN,
    GapReason Reason = GapReason.None,
    string? Detail = null,
    int Digits = -1,
    double WindowSeconds = double.NaN)
{
    /// <summary>
    /// Begin of the measuring window on the monotonic clock; <see cref="ElapsedSeconds"/> is its end. As exact as the answer's way to us is
    /// short: a serial adapter adds up to 16 ms, and what the meter itself takes to speak is not known.
    /// </summary>
    public double WindowStartSeconds => ElapsedSeconds - WindowSeconds;
}
