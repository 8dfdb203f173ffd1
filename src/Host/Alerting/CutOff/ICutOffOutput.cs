namespace Lampwarden.Host.Alerting.CutOff;

/// <summary>The wire to a contactor.</summary>
public interface ICutOffOutput : IAsyncDisposable
{
    /// <summary>Port or address, for messages.</summary>
    string Place { get; }

    /// <summary>Sends a text, opening the wire first where needed.</summary>
    /// <param name="text">As it goes over the wire.</param>
    /// <param name="answer">How the answer must begin; null for none.</param>
    /// <param name="cancellation">A deadline.</param>
    /// <exception cref="IOException">Not sent, or not answered so.</exception>
    Task SendAsync(string text, string? answer, CancellationToken cancellation);
}
