using System.Text;
using Lampwarden.Acquisition;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Fuzzing;

/// <summary>
/// A whole session against a peer that answers well, badly, late, twice, not at all or with noise, and is unplugged now and then.
/// A reading is wrong unless its very line was sent, whole.
/// </summary>
internal sealed class SessionFuzz
{
    private readonly Noise _noise;
    private readonly IInstrumentPort _port;
    private readonly bool _scpi;
    private readonly string _dialect;
    private HashSet<double> _sent = [];
    private HashSet<double> _sentBefore = []; // what was sent just before may still be on its way
    private readonly List<byte> _line = [];
    private readonly Lock _gate = new();
    private byte[] _late = [];

    public SessionFuzz(IInstrumentPort port, string dialect, int seed)
    {
        (_port, _dialect, _scpi, _noise) = (port, dialect, dialect == "scpi", new Noise(seed));
    }

    /// <summary>What came of it.</summary>
    public sealed record Outcome(long Events, long Readings, long Gaps, int Openings, long BytesSent, string? Wrong, double LongestSilenceSeconds);

    /// <summary>Bytes sent so far.</summary>
    public long BytesSent { get; private set; }

    /// <summary>Runs for a time.</summary>
    public async Task<Outcome> RunAsync(TimeSpan time, CancellationToken cancellationToken)
    {
        using var over = CancellationTokenSource.CreateLinkedTokenSource(cancellationToken);
        over.CancelAfter(time);
        var peer = Task.WhenAll(Task.Run(() => _scpi ? AnswerAsync(over.Token) : TalkAsync(over.Token), CancellationToken.None), Task.Run(() => PullCableAsync(over.Token), CancellationToken.None));
        var options = Options();
        await using var session = new MeterSession(options, TimeProvider.System);
        string? wrong = null;
        var (events, silence, last, sequence) = (0L, 0.0, System.Diagnostics.Stopwatch.GetTimestamp(), 0L);
        try
        {
            await foreach (var one in session.ReadAsync(over.Token))
            {
                silence = Math.Max(silence, System.Diagnostics.Stopwatch.GetElapsedTime(last).TotalSeconds);
                last = System.Diagnostics.Stopwatch.GetTimestamp();
                events++;
                if (one.Sequence != sequence++ || (one.Kind == MeterEventKind.Reading) == double.IsNaN(one.Value) || (one.Kind == MeterEventKind.Gap && one.Detail is null))
                {
                    wrong ??= $"malformed event {one}";
                }

                if (one.Kind == MeterEventKind.Reading && !WasSent(one.Value))
                {
                    wrong ??= $"a number that nobody sent: {one}";
                }
            }
        }
        catch (OperationCanceledException) when (over.IsCancellationRequested)
        {
            // The time is over.
        }

        await over.CancelAsync();
        await peer.ConfigureAwait(ConfigureAwaitOptions.SuppressThrowing);
        var health = session.Health;
        var refused = health.LinesRefused.Values.Sum();
        if (health.LinesReceived - health.LinesUsed - health.LinesPassedOver - refused is var difference and not (0 or 1))
        {
            wrong ??= $"the counts do not balance by {difference}: {health.LinesReceived} received, {health.LinesUsed} used, {health.LinesPassedOver} passed over, {refused} refused";
        }

        return new Outcome(events, health.Readings, health.Gaps.Values.Sum(), health.Openings, BytesSent, wrong, silence);
    }

    private MeterOptions Options()
    {
        var options = new MeterOptions { Name = "fuzz", ReadingsPerSecond = 100, WindowSeconds = 0.01, ReplyTimeoutSeconds = 0.05 };
        if (_port is TcpInstrumentPort tcp)
        {
            options.Transport.Kind = "tcp";
            options.Transport.Port = tcp.Port.ToString(System.Globalization.CultureInfo.InvariantCulture);
        }
        else
        {
            options.Transport.Port = _port.Place;
        }

        if (!_scpi)
        {
            options.Protocol.Kind = "lines";
            options.Protocol.Pattern = LineDialect.Pattern(_dialect);
            options.Protocol.RefuseWords = SecondOpinion.RefuseWords(_dialect);
        }

        options.Protocol.StatusSeconds = 1;
        return options;
    }

    private bool WasSent(double value)
    {
        lock (_gate)
        {
            return _sent.Contains(value) || _sentBefore.Contains(value) || _sent.Concat(_sentBefore).Any(one => SecondOpinion.Agree(one, value));
        }
    }

    private async Task AnswerAsync(CancellationToken over)
    {
        var buffer = new byte[1024];
        var command = new StringBuilder();
        while (true)
        {
            var count = await _port.ReadAsync(buffer, over);
            for (var at = 0; at < count; at++)
            {
                if (buffer[at] != '\n')
                {
                    command.Append((char)buffer[at]);
                    continue;
                }

                var text = command.ToString();
                command.Clear();
                await MisbehaveAsync(text, over);
            }
        }
    }

    private async Task MisbehaveAsync(string command, CancellationToken over)
    {
        var answer = Noise.Ascii((command switch
        {
            "*IDN?" => "Gantry Mill,Fuzz 1,0,0",
            "*ESR?" => _noise.Random.Next(4) == 0 ? "160" : "0",
            "SYSTem:ERRor?" => _noise.Random.Next(3) == 0 ? "-113,\"Undefined header\"" : "0,\"No error\"",
            _ when command.Contains('?', StringComparison.Ordinal) => _noise.Number(),
            _ => "",
        }) + "\r\n");
        if (answer.Length == 2)
        {
            return;
        }

        switch (_noise.Random.Next(24))
        {
            case 0:
                return; // nothing
            case 1:
                await SendAsync(_noise.Spoil(answer), over);
                return;
            case 2:
                await SendAsync(_noise.Bytes(200), over);
                return;
            case 3:
                await SendAsync(_noise.Soup(200), over);
                return;
            case 4:
                await SendAsync([.. answer, .. answer], over);
                return;
            case 5:
                (_late, answer) = (answer, _late);
                await SendAsync(answer, over);
                return;
            case 6:
                await SendAsync(answer[..(answer.Length / 2)], over);
                return;
            case 7 when _noise.Random.Next(8) == 0:
                await SendAsync([.. Enumerable.Repeat((byte)'7', 200_000)], over);
                return;
            case 8:
                await SendAsync([.. _noise.Soup(20), .. answer], over);
                return;
            default:
                await SendAsync(answer, over);
                return;
        }
    }

    private async Task TalkAsync(CancellationToken over)
    {
        while (true)
        {
            var line = Noise.Ascii(LineDialect.Write(_dialect, MeasuredQuantity.LineCurrent, _noise.Random.NextDouble() * 9, 0.0001) + "\r\n");
            await SendAsync(_noise.Random.Next(6) switch { 0 => _noise.Bytes(100), 1 => _noise.Soup(100), 2 => _noise.Spoil(line), 3 => line[..(line.Length / 2)], _ => line }, over);
            if (_noise.Random.Next(20) == 0)
            {
                await Task.Delay(_noise.Random.Next(20), over);
            }
        }
    }

    private async Task PullCableAsync(CancellationToken over)
    {
        while (true)
        {
            await Task.Delay(_noise.Random.Next(500, 4000), over);
            _port.Unplug();
            await Task.Delay(_noise.Random.Next(1, 50), over);
            _port.PlugIn();
        }
    }

    private async Task SendAsync(byte[] bytes, CancellationToken over)
    {
        lock (_gate)
        {
            if (_sent.Count > 20_000)
            {
                (_sent, _sentBefore) = ([], _sent);
            }

            BytesSent += bytes.Length;
            foreach (var one in bytes)
            {
                if (one is not ((byte)'\r' or (byte)'\n'))
                {
                    _line.Add(one);
                    continue;
                }

                Note();
                _line.Clear();
            }
        }

        await _port.WriteAsync(bytes, over);
    }

    // What may be read of a line: all of it, and, where the reader forgot a line half arrived, or a cable was pulled, what follows a break.
    private void Note()
    {
        if (_line.Count is 0 or > 4096)
        {
            return;
        }

        var line = System.Runtime.InteropServices.CollectionsMarshal.AsSpan(_line);
        var value = _scpi ? SecondOpinion.Scpi(line) : SecondOpinion.Dialect(_dialect, line);
        if (!double.IsNaN(value))
        {
            _sent.Add(value);
        }
    }
}
