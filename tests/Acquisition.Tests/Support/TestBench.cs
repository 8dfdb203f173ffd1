using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Acquisition.Tests.Support;

/// <summary>A simulated meter on a real wire with a session reading it.</summary>
internal sealed class TestBench : IAsyncDisposable
{
    /// <summary>Long enough for the busiest machine; no test waits for it unless it fails.</summary>
    public static readonly TimeSpan Deadline = TimeSpan.FromSeconds(60);

    private readonly CancellationTokenSource _deadline = CancellationTokenSource.CreateLinkedTokenSource(TestContext.Current.CancellationToken);
    private readonly IAsyncEnumerator<MeterEvent> _events;

    public TestBench(IInstrumentPort port, SimulatedMeterOptions? meter = null, Action<MeterOptions>? session = null, TimeProvider? time = null)
    {
        Port = port;
        Meter = new SimulatedMeter(meter ?? new SimulatedMeterOptions { NoiseCounts = 0 }, World, port, time ?? TimeProvider.System);
        var options = OptionsFor(port);
        session?.Invoke(options);
        Session = new MeterSession(options, time ?? TimeProvider.System);
        _deadline.CancelAfter(Deadline);
        _events = Session.ReadAsync(_deadline.Token).GetAsyncEnumerator(_deadline.Token);
    }

    public SteadyWorld World { get; } = new();

    public IInstrumentPort Port { get; }

    public SimulatedMeter Meter { get; }

    public MeterSession Session { get; }

    public static MeterOptions OptionsFor(IInstrumentPort port)
    {
        var options = new MeterOptions { Name = "line", ReadingsPerSecond = 50, WindowSeconds = 0.02, ReplyTimeoutSeconds = 10, SwitchOnSeconds = 0 };
        if (port is TcpInstrumentPort tcp)
        {
            options.Transport.Kind = "tcp";
            options.Transport.Port = tcp.Port.ToString(System.Globalization.CultureInfo.InvariantCulture);
        }
        else
        {
            options.Transport.Port = port.Place;
            options.Transport.BaudRate = 115200;
        }

        options.Protocol.SetUp = ["CONFigure:CURRent:AC 3"];
        return options;
    }

    public static PseudoTerminal NewTerminal()
    {
        Assert.SkipWhen(OperatingSystem.IsWindows(), "Windows has no pseudo-terminals to make serial ports of.");
        return new PseudoTerminal();
    }

    public async Task<MeterEvent> NextAsync()
    {
        Assert.True(await _events.MoveNextAsync(), "a session never ends by itself");
        return _events.Current;
    }

    /// <summary>The next event that fits; those before it are kept in <paramref name="seen"/>.</summary>
    public async Task<MeterEvent> UntilAsync(Func<MeterEvent, bool> fits, List<MeterEvent>? seen = null)
    {
        while (true)
        {
            var one = await NextAsync();
            seen?.Add(one);
            if (fits(one))
            {
                return one;
            }
        }
    }

    public async ValueTask DisposeAsync()
    {
        await Session.DisposeAsync();
        await _events.DisposeAsync();
        await Meter.DisposeAsync();
        await Port.DisposeAsync();
        _deadline.Dispose();
    }
}
