using System.Buffers;
using System.Text;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>
/// Cuts a stream of bytes into lines in one fixed buffer. LF, CR LF and bare CR end a line; empty lines are passed over.
/// A line longer than the limit is dropped up to its end and reported once, so memory stays bounded whatever comes.
/// </summary>
internal sealed class LineSplitter
{
    private const int MostAtOnce = 8192;
    private const int Room = 4 * MostAtOnce; // an unfinished line, a read's worth not yet cut into lines, and one being read
    private readonly byte[] _buffer = new byte[Room];
    private readonly int _longest;
    private readonly SearchValues<byte> _ends;
    private int _start;
    private int _end;
    private int _searched;      // bytes before this index hold no terminator
    private int _chunkStart;    // where the newest chunk begins: lines starting before it carry the older stamp
    private long _olderStamp;
    private long _newerStamp;
    private bool _dropping;     // inside a line already found too long

    /// <param name="longest">Longest line in bytes that is passed on; at most 4096.</param>
    /// <param name="lineEnd">Characters each of which ends a line; empty for LF and CR.</param>
    public LineSplitter(int longest = 4096, string lineEnd = "")
    {
        ArgumentOutOfRangeException.ThrowIfGreaterThan(longest, MostAtOnce);
        _longest = longest;
        _ends = SearchValues.Create(lineEnd.Length == 0 ? "\n\r"u8 : Encoding.Latin1.GetBytes(lineEnd));
    }

    /// <summary>Bytes received that belong to no finished line yet.</summary>
    public int PendingBytes => _end - _start;

    /// <summary>The unfinished line is one already found too long.</summary>
    public bool InLineTooLong => _dropping;

    /// <summary>At least one more line has ended.</summary>
    public bool HoldsLine => _buffer.AsSpan(_start, _end - _start).IndexOfAnyExcept(_ends) is >= 0 and var text
        && _buffer.AsSpan(_start + text, _end - _start - text).ContainsAny(_ends);

    /// <summary>
    /// Where to read the next bytes to. The lines received before may be taken afterwards, while the bytes come in; once they are
    /// (until <see cref="TryRead"/> says no) there is always room.
    /// </summary>
    public Memory<byte> Free()
    {
        if (_start > 0 && (_start == _end || _buffer.Length - _end < MostAtOnce))
        {
            _buffer.AsSpan(_start, _end - _start).CopyTo(_buffer);
            _searched -= _start;
            _chunkStart -= _start;
            _end -= _start;
            _start = 0;
        }

        return _buffer.AsMemory(_end, Math.Min(MostAtOnce, _buffer.Length - _end));
    }

    /// <summary>Takes note of bytes read into <see cref="Free"/>.</summary>
    /// <param name="count">How many.</param>
    /// <param name="stamp">Monotonic time of their arrival.</param>
    public void Received(int count, long stamp)
    {
        if (_start == _end || _start >= _chunkStart)
        {
            _olderStamp = _start == _end ? stamp : _newerStamp;
        }

        _chunkStart = _end;
        _newerStamp = stamp;
        _end += count;
    }

    /// <summary>Gives the next finished line without its terminator; valid until <see cref="Free"/> is called.</summary>
    /// <param name="line">The line's bytes; empty when it was too long.</param>
    /// <param name="firstByte">Arrival of its first byte.</param>
    /// <param name="lastByte">Arrival of its end.</param>
    /// <param name="tooLong">The line exceeded the limit; its bytes are gone.</param>
    public bool TryRead(out ReadOnlySpan<byte> line, out long firstByte, out long lastByte, out bool tooLong)
    {
        tooLong = false;
        lastByte = _newerStamp;
        while (true)
        {
            var from = Math.Max(_start, _searched);
            var found = _buffer.AsSpan(from, _end - from).IndexOfAny(_ends);
            if (found < 0)
            {
                _searched = _end;
                line = default;
                firstByte = 0;
                return DropIfTooLong(out tooLong);
            }

            var first = _start;
            var length = from + found - first;
            _start = _searched = from + found + 1;
            if (_dropping)
            {
                _dropping = false;
                continue;
            }

            if (length == 0)
            {
                continue;
            }

            firstByte = first < _chunkStart ? _olderStamp : _newerStamp;
            tooLong = length > _longest;
            line = tooLong ? default : _buffer.AsSpan(first, length);
            return true;
        }
    }

    /// <summary>Forgets the unfinished line; returns how many bytes that were.</summary>
    public int DropPending()
    {
        var dropped = PendingBytes;
        _start = _searched = _end;
        return dropped;
    }

    private bool DropIfTooLong(out bool tooLong)
    {
        tooLong = false;
        if (_dropping)
        {
            DropPending();
            return false;
        }

        if (PendingBytes <= _longest)
        {
            return false;
        }

        DropPending();
        _dropping = true;
        tooLong = true;
        return true;
    }
}
