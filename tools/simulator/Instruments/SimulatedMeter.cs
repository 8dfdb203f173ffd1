using System.Text;

namespace Lampwarden.Simulator.Instruments;

/// <summary>
/// A meter that is not there: answers SCPI on a port, measuring a simulated world on a clock that may run faster than the real one.
/// Runs from construction to disposal; safe to unplug and plug in from any thread.
/// </summary>
public sealed class SimulatedMeter : IAsyncDisposable
{
    private const int LongestMessage = 1024;
    private readonly SimulatedMeterOptions _options;
    private readonly IInstrumentPort _port;
    private readonly TimeProvider _time;
    private readonly long _start;
    private readonly MeasuringFront _front;
    private readonly CancellationTokenSource _over = new();
    private readonly Task _running;
    private long _answered;

    /// <summary>Switches the meter on.</summary>
    /// <param name="options">The meter.</param>
    /// <param name="world">What it is connected to.</param>
    /// <param name="port">Its wire; owned and closed by the caller.</param>
    /// <param name="time">The clock of the simulation.</param>
    /// <param name="startStamp">Time stamp of that clock at simulated second 0; null: now.</param>
    public SimulatedMeter(SimulatedMeterOptions options, ISimulatedQuantity world, IInstrumentPort port, TimeProvider time, long? startStamp = null)
    {
        _options = options;
        _port = port;
        _time = time;
        _start = startStamp ?? time.GetTimestamp();
        _front = new MeasuringFront(options, world);
        _running = Task.Run(ServeAsync);
    }

    /// <summary>Simulated seconds now.</summary>
    public double Seconds => _time.GetElapsedTime(_start).TotalSeconds;

    /// <summary>Answers sent so far.</summary>
    public long Answered => Interlocked.Read(ref _answered);

    /// <summary>Pulls the cable.</summary>
    public void Unplug() => _port.Unplug();

    /// <summary>Puts the cable back.</summary>
    public void PlugIn() => _port.PlugIn();

    /// <summary>Switches the meter off; its port stays with the caller.</summary>
    /// <exception cref="Exception">What stopped the meter before, if anything did: a fault of the simulation.</exception>
    public async ValueTask DisposeAsync()
    {
        await _over.CancelAsync();
        try
        {
            await _running;
        }
        catch (OperationCanceledException)
        {
            // Switched off.
        }

        _over.Dispose();
    }

    private async Task ServeAsync()
    {
        var instrument = new ScpiInstrument(_options, MeasureAsync);
        var buffer = new byte[1024];
        var message = new StringBuilder();
        while (true)
        {
            var count = await _port.ReadAsync(buffer, _over.Token);
            for (var at = 0; at < count; at++)
            {
                if (buffer[at] is not ((byte)'\n' or (byte)'\r'))
                {
                    if (message.Length < LongestMessage)
                    {
                        message.Append((char)buffer[at]);
                    }

                    continue;
                }

                if (message.Length > 0)
                {
                    var text = message.ToString();
                    message.Clear();
                    await AnswerAsync(instrument, text);
                }
            }
        }
    }

    private async Task AnswerAsync(ScpiInstrument instrument, string message)
    {
        if (_options.Echo)
        {
            await SendAsync(message);
        }

        if (await instrument.ExecuteAsync(message) is { } answer)
        {
            await SendAsync(answer);
            Interlocked.Increment(ref _answered);
        }
    }

    private ValueTask SendAsync(string text) => _port.WriteAsync(Encoding.ASCII.GetBytes(text + _options.Terminator), _over.Token);

    private async Task<double> MeasureAsync(MeasuredQuantity quantity, double? range)
    {
        if (_options.MeasuringSeconds > 0)
        {
            await Task.Delay(TimeSpan.FromSeconds(_options.MeasuringSeconds), _time, _over.Token);
        }

        return _front.Show(quantity, Seconds, range);
    }
}
