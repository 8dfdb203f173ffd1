using System.IO.Ports;

namespace Lampwarden.Acquisition.Transport;

/// <summary>
/// A serial port through System.IO.Ports. Everything that library needs to be handled with care stands here and nowhere else:
/// <list type="bullet">
/// <item>After a hang-up <c>SerialPort.Close</c> waits for ever if anything was written since. The base stream is therefore taken at opening,
/// and closed first, the port after it.</item>
/// <item><c>IsOpen</c> stays true after a hang-up: only a failing read tells. A read is therefore always pending, with a token,
/// because without one it ignores every timeout.</item>
/// <item><c>DataReceived</c> can end the process on a hang-up, and <c>ReadLine</c> collapses under a flood: neither is used.</item>
/// <item>A missing path, a forbidden one and a busy one all come as UnauthorizedAccessException: <see cref="SerialPortDiagnosis"/> tells them apart.</item>
/// <item>Pseudo-terminals have no DTR or RTS and answer with an error: the lines are driven only where the configuration asks,
/// and a port without them is reported, not refused.</item>
/// </list>
/// </summary>
public sealed class SerialTransport : IMeterTransport
{
    private readonly TransportOptions _options;

    /// <summary>Makes the transport; opens nothing.</summary>
    public SerialTransport(TransportOptions options) => _options = options;

    /// <inheritdoc/>
    public string Place => _options.Port;

    /// <summary>What the last opening had to do without, in a sentence; null when nothing.</summary>
    public string? Shortcoming { get; private set; }

    /// <inheritdoc/>
    public Task<MeterConnection> OpenAsync(CancellationToken cancellationToken) =>
        Task.Run(Open, cancellationToken); // Opening blocks inside the driver, on some adapters for seconds.

    internal MeterConnection Open()
    {
        SerialPort? port = null;
        try
        {
            port = new SerialPort(_options.Port, _options.BaudRate, ParityOf(_options.Parity), _options.DataBits, StopBitsOf(_options.StopBits));
            port.Open();
            port.DiscardInBuffer();
            Shortcoming = DriveLines(port);
            var stream = port.BaseStream;
            var opened = port;
            return new MeterConnection(stream, () =>
            {
                stream.Dispose();
                opened.Dispose();
            });
        }
        catch (Exception error) when (error is UnauthorizedAccessException or IOException or ArgumentException or InvalidOperationException)
        {
            port?.Dispose();
            throw SerialPortDiagnosis.Explain(_options, error);
        }
    }

    private string? DriveLines(SerialPort port)
    {
        string? missing = null;
        missing = Drive("DTR", _options.Dtr, value => port.DtrEnable = value) ?? missing;
        return Drive("RTS", _options.Rts, value => port.RtsEnable = value) ?? missing;

        string? Drive(string line, bool? wanted, Action<bool> set)
        {
            if (wanted is not { } value)
            {
                return null;
            }

            try
            {
                set(value);
                return null;
            }
            catch (Exception error) when (error is IOException or InvalidOperationException)
            {
                return $"{Place} has no {line} line to drive ({error.Message}); an isolated cable fed by it will stay silent.";
            }
        }
    }

    private static Parity ParityOf(string text) => text.ToUpperInvariant() switch
    {
        "NONE" => Parity.None,
        "ODD" => Parity.Odd,
        "EVEN" => Parity.Even,
        "MARK" => Parity.Mark,
        "SPACE" => Parity.Space,
        _ => throw new ArgumentException($"parity '{text}' is not one of none, odd, even, mark, space"),
    };

    private static StopBits StopBitsOf(double count) => count switch
    {
        1 => StopBits.One,
        1.5 => StopBits.OnePointFive,
        2 => StopBits.Two,
        _ => throw new ArgumentException(FormattableString.Invariant($"stopBits {count} is not one of 1, 1.5, 2")),
    };
}
