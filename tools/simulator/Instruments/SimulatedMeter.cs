using System.Text;

namespace Lampwarden.Simulator.Instruments;

/// <summary>
/// A meter that is not there: answers SCPI or talks by itself on a port, measuring a simulated world on a clock that may run faster than the
/// real one, and goes wrong as told. Runs from construction to disposal; trouble may be begun and ended from any thread.
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
    private readonly Mouth _mouth;
    private readonly ScpiInstrument _instrument;
    private readonly Task _running;
    private Task _babble = Task.CompletedTask;
    private long _answered;
    private double _stuckAt = double.NaN;

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
        _mouth = new Mouth(port, options.Terminator, options.Seed);
        _instrument = new ScpiInstrument(options, MeasureAsync);
        var talking = options.Dialect == "scpi" ? Task.CompletedTask : Task.Run(TalkAsync);
        _running = Task.WhenAll([Task.Run(ListenAsync), talking, .. options.Troubles.Select(trouble => Task.Run(() => HappenAsync(trouble)))]);
    }

    /// <summary>Simulated seconds now.</summary>
    public double Seconds => _time.GetElapsedTime(_start).TotalSeconds;

    /// <summary>Answers given and lines sent so far.</summary>
    public long Answered => Interlocked.Read(ref _answered);

    /// <summary>Begins a trouble; it lasts until <see cref="End"/>.</summary>
    public void Begin(MeterTrouble trouble)
    {
        _mouth.Set(trouble, true);
        switch (trouble)
        {
            case MeterTrouble.Unplugged:
                _port.Unplug();
                break;
            case MeterTrouble.Babbling:
                _babble = Task.Run(BabbleAsync);
                break;
            case MeterTrouble.Endless:
                _babble = Task.Run(() => _mouth.SayWithoutEndAsync(_over.Token));
                break;
            case MeterTrouble.Restarted:
                _instrument.PowerUp();
                break;
        }
    }

    /// <summary>Ends a trouble.</summary>
    public void End(MeterTrouble trouble)
    {
        _mouth.Set(trouble, false);
        if (trouble == MeterTrouble.Unplugged)
        {
            _port.PlugIn();
        }
    }

    /// <summary>Pulls the cable.</summary>
    public void Unplug() => Begin(MeterTrouble.Unplugged);

    /// <summary>Puts the cable back.</summary>
    public void PlugIn() => End(MeterTrouble.Unplugged);

    /// <summary>Switches the meter off; its port stays with the caller.</summary>
    /// <exception cref="Exception">What stopped the meter before, if anything did: a fault of the simulation.</exception>
    public async ValueTask DisposeAsync()
    {
        await _over.CancelAsync();
        try
        {
            await _running;
            await _babble;
        }
        catch (OperationCanceledException)
        {
            // Switched off.
        }

        _over.Dispose();
        _mouth.Dispose();
    }

    private async Task ListenAsync()
    {
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
                    await AnswerAsync(text);
                }
            }
        }
    }

    private async Task AnswerAsync(string message)
    {
        if (_options.Dialect != "scpi" || _mouth.Suffers(MeterTrouble.Restarted))
        {
            return; // a free-running meter has no ears, and one that is starting has none yet
        }

        if (_options.Echo)
        {
            await _mouth.SayAsync(message, _over.Token);
        }

        if (await _instrument.ExecuteAsync(message) is { } answer)
        {
            await _mouth.SayAsync(answer, _over.Token);
            Interlocked.Increment(ref _answered);
        }
    }

    private async Task TalkAsync()
    {
        var period = 1 / _options.LinesPerSecond;
        for (var next = Seconds; ; next += period)
        {
            if (next - Seconds is var wait && wait > 0)
            {
                await Task.Delay(TimeSpan.FromSeconds(wait), _time, _over.Token);
            }
            else
            {
                next = Seconds; // a display that was held up does not catch up
                await Task.Yield();
                _over.Token.ThrowIfCancellationRequested();
            }

            var count = _options.Quantity == MeasuredQuantity.LineCurrent ? _options.CurrentCountSize : _options.VoltageCountSize;
            await _mouth.SayAsync(LineDialect.Write(_options.Dialect, _options.Quantity, Show(_options.Quantity, null), count), _over.Token);
            Interlocked.Increment(ref _answered);
        }
    }

    private async Task BabbleAsync()
    {
        while (_mouth.Suffers(MeterTrouble.Babbling))
        {
            await _mouth.SayAsync("+7.77700000E-01", _over.Token);
            await Task.Delay(1, _over.Token);
        }
    }

    private async Task HappenAsync(ScheduledTrouble trouble)
    {
        await Task.Delay(TimeSpan.FromSeconds(Math.Max(0, trouble.AtSeconds - Seconds)), _time, _over.Token);
        Begin(trouble.Kind);
        if (trouble.ForSeconds <= 0 && trouble.Kind is not (MeterTrouble.Endless or MeterTrouble.Restarted))
        {
            return;
        }

        await Task.Delay(TimeSpan.FromSeconds(trouble.ForSeconds), _time, _over.Token);
        End(trouble.Kind);
    }

    private async Task<double> MeasureAsync(MeasuredQuantity quantity, double? range)
    {
        if (_options.MeasuringSeconds > 0)
        {
            await Task.Delay(TimeSpan.FromSeconds(_options.MeasuringSeconds), _time, _over.Token);
        }

        return Show(quantity, range);
    }

    private double Show(MeasuredQuantity quantity, double? range)
    {
        var shown = _front.Show(quantity, Seconds, range);
        _stuckAt = !_mouth.Suffers(MeterTrouble.Stuck) ? double.NaN : double.IsNaN(_stuckAt) ? shown : _stuckAt;
        return double.IsNaN(_stuckAt) ? shown : _stuckAt;
    }
}
