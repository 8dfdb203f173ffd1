using System.Runtime.InteropServices;
using System.Threading.Channels;

namespace Lampwarden.Simulator.Instruments;

/// <summary>
/// A serial port made by the program itself. The path a client opens is a symbolic link that always points at the present terminal,
/// so that a cable pulled and put back is found under the same name. Linux and macOS only.
/// </summary>
public sealed class PseudoTerminal : IInstrumentPort
{
    private readonly Lock _gate = new();
    private readonly Channel<byte[]> _received = Channel.CreateUnbounded<byte[]>(new UnboundedChannelOptions { SingleReader = true });
    private readonly string? _ownFolder;
    private Line? _line;
    private ReadOnlyMemory<byte> _rest;

    /// <summary>Opens a terminal.</summary>
    /// <param name="linkPath">Where the link to it shall stand; null: in a fresh folder below the system's temporary one.</param>
    /// <exception cref="IOException">There are no pseudo-terminals here.</exception>
    public PseudoTerminal(string? linkPath = null)
    {
        if (linkPath is null)
        {
            _ownFolder = Directory.CreateTempSubdirectory("lampwarden-meter-").FullName;
            linkPath = Path.Combine(_ownFolder, "port");
        }

        Place = linkPath;
        PlugIn();
    }

    /// <inheritdoc/>
    public string Place { get; }

    /// <summary>The terminal the link points at now, such as /dev/pts/7; null while unplugged.</summary>
    public string? SlavePath => _line?.SlavePath;

    /// <inheritdoc/>
    public bool IsPluggedIn => _line is not null;

    /// <inheritdoc/>
    public void PlugIn()
    {
        lock (_gate)
        {
            if (_line is not null)
            {
                return;
            }

            _line = new Line(_received.Writer);
            Link(_line);
        }
    }

    /// <summary>Pulls the cable and puts it into another socket at once: the terminal gets another name, the link stays.</summary>
    public void PlugInElsewhere()
    {
        lock (_gate)
        {
            var fresh = new Line(_received.Writer); // made while the old one is there, so that the system cannot give the old name again
            _line?.Dispose();
            _line = fresh;
            Link(fresh);
        }
    }

    /// <inheritdoc/>
    public void Unplug()
    {
        lock (_gate)
        {
            File.Delete(Place);
            _line?.Dispose();
            _line = null;
        }
    }

    /// <inheritdoc/>
    public async ValueTask<int> ReadAsync(Memory<byte> buffer, CancellationToken cancellationToken)
    {
        if (_rest.IsEmpty)
        {
            _rest = await _received.Reader.ReadAsync(cancellationToken);
        }

        var count = Math.Min(buffer.Length, _rest.Length);
        _rest[..count].CopyTo(buffer);
        _rest = _rest[count..];
        return count;
    }

    /// <inheritdoc/>
    public async ValueTask WriteAsync(ReadOnlyMemory<byte> bytes, CancellationToken cancellationToken)
    {
        while (!bytes.IsEmpty)
        {
            if (_line is not { } line)
            {
                return;
            }

            var written = line.Write(bytes.Span);
            if (written > 0)
            {
                bytes = bytes[written..];
            }
            else if (written < 0 || !await Task.Run(line.WaitForRoom, cancellationToken))
            {
                return; // A client that takes nothing for a second is not listening; a real meter would talk into the air.
            }
        }
    }

    /// <inheritdoc/>
    public ValueTask DisposeAsync()
    {
        Unplug();
        if (_ownFolder is not null)
        {
            Directory.Delete(_ownFolder, recursive: true);
        }

        return ValueTask.CompletedTask;
    }

    // Exchanged in one step: a client never finds the link missing while a terminal is there.
    private void Link(Line line)
    {
        var fresh = Place + ".new";
        File.Delete(fresh);
        File.CreateSymbolicLink(fresh, line.SlavePath);
        File.Move(fresh, Place, overwrite: true);
    }

    /// <summary>One terminal from plugging in to pulling out, with a thread that waits for the client's bytes.</summary>
    private sealed class Line : IDisposable
    {
        private readonly int _master;
        private readonly int _slave;
        private readonly int _wakeRead;
        private readonly int _wakeWrite;
        private readonly ChannelWriter<byte[]> _sink;
        private readonly Thread _reader;
        private readonly Lock _open = new(); // a descriptor must not be closed, and perhaps given out anew, under a running call
        private bool _closed;

        public Line(ChannelWriter<byte[]> sink)
        {
            _sink = sink;
            (_master, _slave, SlavePath) = Terminal.Open();
            Span<int> ends = stackalloc int[2];
            if (Terminal.Pipe(ends) != 0)
            {
                throw new IOException("pipe failed: too many open files");
            }

            (_wakeRead, _wakeWrite) = (ends[0], ends[1]);
            _reader = new Thread(ReadUntilClosed) { IsBackground = true, Name = "simulated meter " + SlavePath };
            _reader.Start();
        }

        public string SlavePath { get; }

        /// <summary>Writes without waiting: bytes taken, 0 when there is no room, -1 when the line is closed.</summary>
        public int Write(ReadOnlySpan<byte> bytes)
        {
            lock (_open)
            {
                if (_closed)
                {
                    return -1;
                }

                var count = (int)Terminal.Write(_master, bytes, (nuint)bytes.Length);
                return count >= 0 ? count : Marshal.GetLastPInvokeError() is Terminal.TryAgainLinux or Terminal.TryAgainMac ? 0 : -1;
            }
        }

        public bool WaitForRoom()
        {
            lock (_open)
            {
                return !_closed && (Terminal.Wait(_master, Terminal.PollOut, _wakeRead, 1000).Ready & Terminal.PollOut) != 0;
            }
        }

        public void Dispose()
        {
            Terminal.Write(_wakeWrite, [1], 1);
            _reader.Join();
            lock (_open)
            {
                _closed = true;
                Terminal.Close(_slave);
                Terminal.Close(_master);
                Terminal.Close(_wakeRead);
                Terminal.Close(_wakeWrite);
            }
        }

        private void ReadUntilClosed()
        {
            Span<byte> buffer = stackalloc byte[4096];
            while (true)
            {
                var (ready, woken) = Terminal.Wait(_master, Terminal.PollIn, _wakeRead, -1);
                if (woken != 0)
                {
                    return;
                }

                var count = (ready & Terminal.PollIn) != 0 ? (int)Terminal.Read(_master, buffer, (nuint)buffer.Length) : 0;
                if (count > 0)
                {
                    _sink.TryWrite(buffer[..count].ToArray());
                }
                else if ((ready & Terminal.PollHangUp) != 0)
                {
                    Thread.Sleep(10); // cannot happen while our slave descriptor is open; if it does, it must not spin
                }
            }
        }
    }
}
