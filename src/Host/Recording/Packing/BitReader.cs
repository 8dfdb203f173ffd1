using System.Buffers.Binary;
using System.Numerics;
using System.Runtime.CompilerServices;

namespace Lampwarden.Host.Recording.Packing;

/// <summary>Reads what <see cref="BitWriter"/> wrote. Reading past the end is an <see cref="InvalidDataException"/>.</summary>
internal ref struct BitReader(ReadOnlySpan<byte> bytes)
{
    private readonly ReadOnlySpan<byte> _bytes = bytes;
    private int _next;
    private ulong _held;
    private int _heldBits;

    /// <summary>The next 0 to 64 bits.</summary>
    public ulong Read(int bits)
    {
        if (bits > 32)
        {
            var high = Read(bits - 32);
            return (high << 32) | Read(32);
        }

        if (bits == 0)
        {
            return 0;
        }

        Refill();
        var value = _held >> (64 - bits);
        Consume(bits);
        return value;
    }

    /// <summary>What <see cref="BitWriter.WriteNumber"/> wrote.</summary>
    public long ReadNumber()
    {
        ulong value = 0;
        for (var shift = 0; shift < 70; shift += 7)
        {
            var group = Read(8);
            value |= (group & 0x7F) << shift;
            if (group < 0x80)
            {
                return (long)(value >> 1) ^ -(long)(value & 1);
            }
        }

        throw new InvalidDataException("a number in the packed readings does not end");
    }

    /// <summary>One Rice code: ones, a zero, then <paramref name="low"/> bits; <paramref name="escape"/> ones announce 64 plain bits.</summary>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public ulong ReadRice(int low, int escape)
    {
        Refill();
        var ones = BitOperations.LeadingZeroCount(~_held);
        if (ones >= escape)
        {
            Consume(escape);
            return Read(64);
        }

        // The shift by 63 - low in two steps keeps low = 0 right: a shift by 64 would be a shift by none.
        var value = ((ulong)ones << low) | (_held << (ones + 1) >> 1 >> (63 - low));
        Consume(ones + 1 + low);
        return value;
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private void Refill()
    {
        if (_heldBits >= 56)
        {
            return;
        }

        if (_next + 8 <= _bytes.Length)
        {
            _held |= BinaryPrimitives.ReadUInt64BigEndian(_bytes[_next..]) >> _heldBits;
            _next += (63 - _heldBits) >> 3;
            _heldBits |= 56;
            return;
        }

        while (_heldBits <= 56 && _next < _bytes.Length)
        {
            _held |= (ulong)_bytes[_next++] << (56 - _heldBits);
            _heldBits += 8;
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private void Consume(int bits)
    {
        if (bits > _heldBits)
        {
            throw new InvalidDataException("the packed readings end too early");
        }

        _held <<= bits;
        _heldBits -= bits;
    }
}
