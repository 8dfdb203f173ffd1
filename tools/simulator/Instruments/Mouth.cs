using System.Text;

namespace Lampwarden.Simulator.Instruments;

/// <summary>Sends a meter's lines, spoilt by whatever trouble reigns at the moment. Thread-safe.</summary>
internal sealed class Mouth : IDisposable
{
    private const int EndlessBytes = 1 << 20;
    private readonly IInstrumentPort _port;
    private readonly string _terminator;
    private readonly SemaphoreSlim _oneAtATime = new(1);
    private readonly HashSet<MeterTrouble> _troubles = [];
    private readonly Random _noise;
    private byte[]? _held;
    private int _lines;

    public Mouth(IInstrumentPort port, string terminator, int seed)
    {
        _port = port;
        _terminator = terminator;
        _noise = new Random(seed);
    }

    public bool Suffers(MeterTrouble trouble)
    {
        lock (_troubles)
        {
            return _troubles.Contains(trouble);
        }
    }

    public void Set(MeterTrouble trouble, bool reigns)
    {
        lock (_troubles)
        {
            _ = reigns ? _troubles.Add(trouble) : _troubles.Remove(trouble);
            _held = null;
        }
    }

    /// <summary>Sends one line.</summary>
    public async Task SayAsync(string line, CancellationToken cancellationToken)
    {
        if (Suffers(MeterTrouble.Silent) || Suffers(MeterTrouble.Restarted))
        {
            return;
        }

        if (Spoil(Encoding.Latin1.GetBytes(line + _terminator)) is { } bytes)
        {
            await SendAsync(bytes, cancellationToken);
        }
    }

    /// <summary>Sends a megabyte of digits without a line end.</summary>
    public async Task SayWithoutEndAsync(CancellationToken cancellationToken)
    {
        var digits = Encoding.ASCII.GetBytes(string.Concat(Enumerable.Repeat("0123456789", EndlessBytes / 10)));
        await SendAsync(digits, cancellationToken);
    }

    public void Dispose() => _oneAtATime.Dispose();

    private async Task SendAsync(byte[] bytes, CancellationToken cancellationToken)
    {
        await _oneAtATime.WaitAsync(cancellationToken);
        try
        {
            if (!Suffers(MeterTrouble.Split))
            {
                await _port.WriteAsync(bytes, cancellationToken);
                return;
            }

            for (var at = 0; at < bytes.Length; at++)
            {
                await _port.WriteAsync(bytes.AsMemory(at, 1), cancellationToken);
                await Task.Delay(1, cancellationToken);
            }
        }
        finally
        {
            _oneAtATime.Release();
        }
    }

    private byte[]? Spoil(byte[] bytes)
    {
        lock (_troubles)
        {
            _lines++;
            if (_troubles.Contains(MeterTrouble.Late))
            {
                (bytes, _held) = (_held ?? [], bytes);
            }

            if (_troubles.Contains(MeterTrouble.Garbled))
            {
                // A bit time of the wrong length makes other bytes of ours, among them line ends, and more or fewer of them.
                bytes = [.. bytes.SelectMany(one => _noise.Next(4) == 0 ? new[] { (byte)_noise.Next(256), (byte)(one >> 1) } : [(byte)(one << 1 | 0x80)])];
            }

            if (_troubles.Contains(MeterTrouble.HalfLines))
            {
                bytes = bytes[..(bytes.Length / 2)];
            }

            if (_troubles.Contains(MeterTrouble.Nuls))
            {
                var inside = Math.Min(3, bytes.Length - 1);
                bytes = _lines % 2 == 0 ? [0, 0, .. bytes] : [.. bytes[..inside], 0, .. bytes[inside..]];
            }

            if (_troubles.Contains(MeterTrouble.Glued))
            {
                bytes = [.. bytes, .. bytes];
            }

            return bytes.Length > 0 ? bytes : null;
        }
    }
}
