using System.Net.Sockets;
using System.Text;

namespace Lampwarden.Host.Tests.Unattended;

/// <summary>The service manager's end of sd_notify(3): a datagram socket of the test.</summary>
internal sealed class NotifySocket : IDisposable
{
    private readonly Socket _socket = new(AddressFamily.Unix, SocketType.Dgram, ProtocolType.Unspecified);
    private readonly DirectoryInfo _folder = Directory.CreateTempSubdirectory("lw-notify-");
    private readonly List<string> _messages = [];

    public NotifySocket()
    {
        Path = System.IO.Path.Combine(_folder.FullName, "notify");
        _socket.Bind(new UnixDomainSocketEndPoint(Path));
    }

    public string Path { get; }

    /// <summary>Everything received so far.</summary>
    public IReadOnlyList<string> Messages
    {
        get
        {
            var buffer = new byte[4096];
            while (_socket.Available > 0)
            {
                _messages.Add(Encoding.UTF8.GetString(buffer, 0, _socket.Receive(buffer)));
            }

            return _messages;
        }
    }

    public int Feeds => Messages.Count(message => message == "WATCHDOG=1");

    public void Dispose()
    {
        _socket.Dispose();
        _folder.Delete(recursive: true);
    }
}
