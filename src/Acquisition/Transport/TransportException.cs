namespace Lampwarden.Acquisition.Transport;

/// <summary>The wire to a meter cannot be opened or has gone. The message says what, where and what to do.</summary>
public sealed class TransportException : IOException
{
    /// <summary>Makes the exception.</summary>
    /// <param name="reason">The gap reason every poll gets until the wire is back.</param>
    /// <param name="message">What happened, where, and what to do.</param>
    /// <param name="inner">The system's own error, where there is one.</param>
    public TransportException(GapReason reason, string message, Exception? inner = null)
        : base(message, inner) => Reason = reason;

    /// <summary>Why there is no reading while this lasts.</summary>
    public GapReason Reason { get; }
}
