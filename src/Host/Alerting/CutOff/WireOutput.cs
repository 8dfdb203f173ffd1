using System.Text;
using Lampwarden.Acquisition.Transport;

namespace Lampwarden.Host.Alerting.CutOff;

/// <summary>A contactor on a serial port or TCP. The wire is kept open and opened again after any fault. One caller at a time.</summary>
public sealed class WireOutput(IMeterTransport transport) : ICutOffOutput
{
    private const int LongestAnswer = 256;

    private MeterConnection? _wire;

    /// <inheritdoc/>
    public string Place => transport.Place;

    /// <inheritdoc/>
    public async Task SendAsync(string text, string? answer, CancellationToken cancellation)
    {
        try
        {
            _wire ??= await transport.OpenAsync(cancellation);
            await _wire.Stream.WriteAsync(Encoding.UTF8.GetBytes(text), cancellation);
            await _wire.Stream.FlushAsync(cancellation);
            if (answer is not null)
            {
                await AnswerAsync(_wire.Stream, answer, cancellation);
            }
        }
        catch (Exception error)
        {
            await DisposeAsync();
            if (error is IOException or OperationCanceledException)
            {
                throw;
            }

            throw new IOException($"{Place}: {error.Message}", error);
        }
    }

    /// <inheritdoc/>
    public async ValueTask DisposeAsync()
    {
        if (_wire is { } wire)
        {
            _wire = null;
            await wire.DisposeAsync();
        }
    }

    private async Task AnswerAsync(Stream stream, string expected, CancellationToken cancellation)
    {
        // Lines that answer earlier texts may still be on the way: the first one that fits counts.
        var seen = new StringBuilder();
        var one = new byte[1];
        while (seen.Length < LongestAnswer && await stream.ReadAsync(one, cancellation) == 1)
        {
            seen.Append((char)one[0]);
            if (seen.ToString().Contains(expected, StringComparison.Ordinal))
            {
                return;
            }
        }

        throw new IOException($"{Place} answered '{seen.ToString().Trim()}' instead of '{expected}'.");
    }
}
