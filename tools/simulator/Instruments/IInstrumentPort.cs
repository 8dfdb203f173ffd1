namespace Lampwarden.Simulator.Instruments;

/// <summary>The instrument's end of a wire: a pseudo-terminal or a TCP listener.</summary>
public interface IInstrumentPort : IAsyncDisposable
{
    /// <summary>What a client opens: a path, or host:port. Stays the same over unplugging.</summary>
    string Place { get; }

    /// <summary>The client can reach the instrument.</summary>
    bool IsPluggedIn { get; }

    /// <summary>Waits for bytes from the client; completes with the number read. While unplugged, waits.</summary>
    ValueTask<int> ReadAsync(Memory<byte> buffer, CancellationToken cancellationToken);

    /// <summary>Sends bytes; dropped when nobody is there to take them.</summary>
    ValueTask WriteAsync(ReadOnlyMemory<byte> bytes, CancellationToken cancellationToken);

    /// <summary>Pulls the cable: the client's side sees a hang-up.</summary>
    void Unplug();

    /// <summary>Puts the cable back, under the same <see cref="Place"/>.</summary>
    void PlugIn();
}
