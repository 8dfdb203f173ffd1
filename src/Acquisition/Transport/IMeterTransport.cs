namespace Lampwarden.Acquisition.Transport;

/// <summary>A way to a meter that can be opened again and again: a serial port or a TCP address.</summary>
public interface IMeterTransport
{
    /// <summary>The port or address as a person would name it, for messages.</summary>
    string Place { get; }

    /// <summary>Opens the wire.</summary>
    /// <exception cref="TransportException">The port or host is missing, busy, forbidden or does not answer.</exception>
    Task<MeterConnection> OpenAsync(CancellationToken cancellationToken);
}
