using System.Globalization;
using System.Net.Sockets;
using System.Text;

namespace Lampwarden.Host.Unattended;

/// <summary>
/// Speaks to systemd as sd_notify(3) describes: one datagram a message to the socket named by NOTIFY_SOCKET. Without that
/// variable every call does nothing. A message that cannot be sent is lost in silence: the watchdog's silence then speaks.
/// </summary>
public sealed class ServiceManager : IDisposable
{
    private readonly Socket? _socket;
    private readonly System.Net.EndPoint? _place;

    /// <summary>Reads the environment.</summary>
    /// <param name="environment">Gives a variable's value; null for the process's own environment.</param>
    public ServiceManager(Func<string, string?>? environment = null)
    {
        environment ??= Environment.GetEnvironmentVariable;
        if (environment("NOTIFY_SOCKET") is { Length: > 1 } path && Socket.OSSupportsUnixDomainSockets)
        {
            // A leading @ stands for the zero byte of an abstract address.
            _place = new UnixDomainSocketEndPoint(path[0] == '@' ? "\0" + path[1..] : path);
            // A manager that does not read its socket must not hold up the one who says that all is well.
            _socket = new Socket(AddressFamily.Unix, SocketType.Dgram, ProtocolType.Unspecified) { Blocking = false };
        }

        // WATCHDOG_PID, where set, says whose watchdog it is (sd_watchdog_enabled(3)).
        var ours = environment("WATCHDOG_PID") is not { } id || id == Environment.ProcessId.ToString(CultureInfo.InvariantCulture);
        if (ours && long.TryParse(environment("WATCHDOG_USEC"), NumberStyles.None, CultureInfo.InvariantCulture, out var microseconds) && microseconds > 0)
        {
            WatchdogTime = TimeSpan.FromMicroseconds(microseconds);
        }
    }

    /// <summary>How long the manager waits for a sign of life; null where it does not.</summary>
    public TimeSpan? WatchdogTime { get; }

    /// <summary>Whether there is a manager to speak to.</summary>
    public bool IsThere => _socket is not null;

    /// <summary>The service is up.</summary>
    public void Ready() => Send("READY=1");

    /// <summary>The service ends by itself.</summary>
    public void Stopping() => Send("STOPPING=1");

    /// <summary>A sign of life.</summary>
    public void Feed() => Send("WATCHDOG=1");

    /// <summary>One line for <c>systemctl status</c>.</summary>
    public void Status(string text) => Send("STATUS=" + text.Replace('\n', ' '));

    /// <inheritdoc/>
    public void Dispose() => _socket?.Dispose();

    private void Send(string message)
    {
        try
        {
            _socket?.SendTo(Encoding.UTF8.GetBytes(message), SocketFlags.None, _place!);
        }
        catch (SocketException)
        {
            // See above.
        }
    }
}
