using System.Net;
using System.Net.Sockets;
using System.Text;
using Lampwarden.Acquisition;
using Lampwarden.Acquisition.Transport;
using Lampwarden.Host.Alerting.CutOff;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Tests.Alerting.Routes;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Host.Tests.Alerting.CutOff;

/// <summary>The wires themselves: TCP, a pseudo-terminal, a broker.</summary>
public sealed class WireOutputTests
{
    private static CancellationToken Token => TestContext.Current.CancellationToken;

    private static WireOutput Tcp(TcpListener listener) => new(new TcpTransport(new TransportOptions
    {
        Kind = "tcp", Port = ((IPEndPoint)listener.LocalEndpoint).Port.ToString(System.Globalization.CultureInfo.InvariantCulture),
    }));

    [Fact]
    public async Task SendAsync_OverTcp_IsAnsweredAndReopensAfterAHangUp()
    {
        using var listener = new TcpListener(IPAddress.Loopback, 0);
        listener.Start();
        await using var output = Tcp(listener);
        for (var round = 0; round < 2; round++)
        {
            var sending = output.SendAsync("OPEN\n", "OK", Token);
            using var client = await listener.AcceptTcpClientAsync(Token);
            var bytes = new byte[5];
            await client.GetStream().ReadExactlyAsync(bytes, Token);
            Assert.Equal("OPEN\n", Encoding.ASCII.GetString(bytes));
            await client.GetStream().WriteAsync("HOLD OK\n"u8.ToArray(), Token);
            await sending;
            client.Close();
            // The first text after a hang-up finds out; the next opens anew.
            await Assert.ThrowsAnyAsync<IOException>(async () =>
            {
                while (true)
                {
                    await output.SendAsync("X", "OK", Token);
                }
            });
        }
    }

    [Fact]
    public async Task SendAsync_AWrongAnswer_IsNoSuccess()
    {
        using var listener = new TcpListener(IPAddress.Loopback, 0);
        listener.Start();
        await using var output = Tcp(listener);
        var sending = output.SendAsync("OPEN\n", "OK", Token);
        using (var client = await listener.AcceptTcpClientAsync(Token))
        {
            await client.GetStream().WriteAsync("ERR 3\n"u8.ToArray(), Token);
            client.Client.Shutdown(SocketShutdown.Send);
            var error = await Assert.ThrowsAnyAsync<IOException>(() => sending);
            Assert.Contains("ERR 3", error.Message, StringComparison.Ordinal);
        }
    }

    [Fact]
    public async Task SendAsync_OverASerialPort_Arrives()
    {
        Outside.Need(!OperatingSystem.IsWindows(), "there are no pseudo-terminals");
        await using var terminal = new PseudoTerminal();
        await using var output = new WireOutput(new SerialTransport(new TransportOptions { Kind = "serial", Port = terminal.Place }));
        var sending = output.SendAsync("OPEN\n", "OK", Token);
        var buffer = new byte[64];
        var count = await terminal.ReadAsync(buffer, Token);
        Assert.Equal("OPEN\n", Encoding.ASCII.GetString(buffer, 0, count));
        await terminal.WriteAsync("OK\n"u8.ToArray(), Token);
        await sending;
    }

    [Fact]
    public async Task SendAsync_OverABroker_ReachesTheTopic()
    {
        using var broker = new Broker();
        await broker.StartAsync();
        using var contactor = broker.Subscribe("bay/3/#");
        await using var output = new MqttOutput(
            new CutOffOutputOptions { Bench = "bay-3", Kind = "mqtt", Port = broker.Port.ToString(System.Globalization.CultureInfo.InvariantCulture), Topic = "bay/3/contactor" }, "shop-1", TimeProvider.System);
        await contactor.UntilAsync(line => line == "bay/3/contactor/watcher/status online");
        await output.SendAsync("OPEN", null, Token);
        await contactor.UntilAsync(line => line == "bay/3/contactor OPEN");
    }
}
