namespace Lampwarden.Host.Recording.Packing;

/// <summary>Bits into bytes, most significant first. Not safe for several threads.</summary>
internal sealed class BitWriter
{
    private byte[] _bytes = new byte[256];
    private int _length;
    private ulong _held;
    private int _heldBits;

    /// <summary>Appends the lowest <paramref name="bits"/> bits (0 to 64) of a value.</summary>
    public void Write(ulong value, int bits)
    {
        if (bits > 32)
        {
            Write(value >> 32, bits - 32);
            bits = 32;
        }

        if (bits == 0)
        {
            return;
        }

        _held = (_held << bits) | (value & (ulong.MaxValue >> (64 - bits)));
        _heldBits += bits;
        while (_heldBits >= 8)
        {
            _heldBits -= 8;
            Append((byte)(_held >> _heldBits));
        }
    }

    /// <summary>Appends a whole number, small ones in few bits (groups of seven).</summary>
    public void WriteNumber(long value)
    {
        var rest = (ulong)(value << 1) ^ (ulong)(value >> 63);
        while (rest >= 0x80)
        {
            Write(0x80 | (rest & 0x7F), 8);
            rest >>= 7;
        }

        Write(rest, 8);
    }

    /// <summary>The bytes so far; an unfinished last byte is filled with zeros.</summary>
    public byte[] ToArray()
    {
        if (_heldBits > 0)
        {
            Write(0, 8 - _heldBits);
        }

        return _bytes.AsSpan(0, _length).ToArray();
    }

    private void Append(byte value)
    {
        if (_length == _bytes.Length)
        {
            Array.Resize(ref _bytes, _length * 2);
        }

        _bytes[_length++] = value;
    }
}
