namespace Lampwarden.Acquisition.Protocol;

/// <summary>A language: turns an open wire into events until the wire is gone.</summary>
internal interface IMeterProtocol
{
    /// <summary>Runs until the token says stop or the wire is gone.</summary>
    /// <exception cref="Transport.TransportException">The wire is gone.</exception>
    Task RunAsync(Wire wire, CancellationToken cancellationToken);
}
