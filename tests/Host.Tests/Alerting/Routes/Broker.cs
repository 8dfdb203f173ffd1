using System.Diagnostics;
using System.Net.Sockets;

namespace Lampwarden.Host.Tests.Alerting.Routes;

/// <summary>Debian's mosquitto on a loopback port of its own, and its command-line subscriber as a foreign peer.</summary>
internal sealed class Broker : IDisposable
{
    private readonly DirectoryInfo _folder = Directory.CreateTempSubdirectory("lw-broker-");
    private readonly string _program = Outside.Program("mosquitto");
    private Process? _process;

    public int Port { get; } = WebhookRouteTests.FreePort();

    public async Task StartAsync()
    {
        var config = Path.Combine(_folder.FullName, "mosquitto.conf");
        await File.WriteAllTextAsync(config, $"listener {Port} 127.0.0.1\nallow_anonymous true\npersistence false\nlog_dest none\n");
        _process = Process.Start(new ProcessStartInfo(_program, ["-c", config]) { RedirectStandardError = true, RedirectStandardOutput = true })!;
        await Patience.UntilAsync(() =>
        {
            try
            {
                using var client = new TcpClient("127.0.0.1", Port);
                return true;
            }
            catch (SocketException)
            {
                return false;
            }
        });
    }

    public void Kill()
    {
        _process?.Kill();
        _process?.WaitForExit();
        _process?.Dispose();
        _process = null;
    }

    /// <summary>Starts a foreign subscriber; its lines are "topic payload".</summary>
    public Subscriber Subscribe(string topic) => new(Port, topic);

    public void Dispose()
    {
        Kill();
        _folder.Delete(recursive: true);
    }
}

/// <summary>A running mosquitto_sub.</summary>
internal sealed class Subscriber : IDisposable
{
    private readonly Process _process;
    private readonly List<string> _lines = [];

    public Subscriber(int port, string topic)
    {
        var port_ = port.ToString(System.Globalization.CultureInfo.InvariantCulture);
        _process = Process.Start(new ProcessStartInfo(Outside.Program("mosquitto_sub"), ["-h", "127.0.0.1", "-p", port_, "-t", topic, "-v", "-q", "1"]) { RedirectStandardOutput = true })!;
        _process.OutputDataReceived += (_, line) =>
        {
            if (line.Data is not null)
            {
                lock (_lines)
                {
                    _lines.Add(line.Data);
                }
            }
        };
        _process.BeginOutputReadLine();
    }

    public IReadOnlyList<string> Lines
    {
        get
        {
            lock (_lines)
            {
                return [.. _lines];
            }
        }
    }

    public Task UntilAsync(Func<string, bool> line) => Patience.UntilAsync(() => Lines.Any(line), looks: 3000);

    public void Dispose()
    {
        _process.Kill();
        _process.WaitForExit();
        _process.Dispose();
    }
}
