using System.Diagnostics;
using Lampwarden.Acquisition.Tests.Support;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Acquisition.Tests.Transport;

/// <summary>A pseudo-terminal that is not of our making, with Debian's socat between it and the simulated meter's TCP side.</summary>
public sealed class SocatTests
{
    [Fact]
    public async Task ReadAsync_ThroughSocat_GivesReadingsAndSurvivesItsEnd()
    {
        var socat = Outside.Program("socat");
        var link = Path.Combine(Directory.CreateTempSubdirectory("lampwarden-socat-").FullName, "port");
        await using var behind = new TcpInstrumentPort();
        await using var meter = new SimulatedMeter(new SimulatedMeterOptions { NoiseCounts = 0 }, new SteadyWorld(), behind, TimeProvider.System);
        var options = TestBench.OptionsFor(behind);
        options.Transport = new TransportOptions { Port = link, BaudRate = 115200 };
        await using var session = new MeterSession(options, TimeProvider.System);
        using var deadline = CancellationTokenSource.CreateLinkedTokenSource(TestContext.Current.CancellationToken);
        deadline.CancelAfter(TestBench.Deadline);
        await using var events = session.ReadAsync(deadline.Token).GetAsyncEnumerator(deadline.Token);

        for (var round = 0; round < 2; round++)
        {
            using var bridge = Process.Start(new ProcessStartInfo(socat, [$"PTY,link={link},rawer", $"TCP:{behind.Place}"]))!;
            await Until(one => one.Value == 0.4125);
            bridge.Kill();
            await bridge.WaitForExitAsync(deadline.Token);
            await Until(one => one.Kind == MeterEventKind.Gap);
        }

        Assert.Equal(2, session.Health.Openings);

        async Task Until(Func<MeterEvent, bool> fits)
        {
            do
            {
                Assert.True(await events.MoveNextAsync());
            }
            while (!fits(events.Current));
        }
    }
}
