using System.Numerics;
using System.Runtime.CompilerServices;

namespace Lampwarden.Host.Recording.Packing;

/// <summary>
/// Whole numbers that change little: in blocks of 128 the best of four predictors is taken, and what it leaves is written
/// in Rice codes (R. F. Rice, JPL publication 79-22, 1979), the scheme lossless audio coders use for the same reason:
/// a settled current is noise about a slowly moving mean, and noise is all that has to be written.
/// </summary>
internal static class IntegerColumn
{
    private const int Block = 128;
    private const int Escape = 24;
    private const int AllZero = 31;
    private const int EscapeBits = Escape + 64;

    /// <summary>Writes the numbers; their count is the caller's to keep. Each must lie within +-2^57.</summary>
    public static void Write(BitWriter writer, ReadOnlySpan<long> values)
    {
        if (values.IsEmpty)
        {
            return;
        }

        writer.WriteNumber(values[0]);
        var past = new Past(values[0]);
        Span<ulong> left = stackalloc ulong[Predictors * Block];
        for (var start = 1; start < values.Length; start += Block)
        {
            WriteBlock(writer, values.Slice(start, Math.Min(Block, values.Length - start)), ref past, left);
        }
    }

    /// <summary>Reads as many numbers as <paramref name="values"/> holds.</summary>
    /// <exception cref="InvalidDataException">The bits end too early.</exception>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)] // the first window after a start decodes as fast as the hundredth
    public static void Read(ref BitReader reader, Span<long> values)
    {
        if (values.IsEmpty)
        {
            return;
        }

        values[0] = reader.ReadNumber();
        var past = new Past(values[0]);
        for (var start = 1; start < values.Length; start += Block)
        {
            var predictor = (int)reader.Read(2);
            var low = (int)reader.Read(5);
            foreach (ref var value in values.Slice(start, Math.Min(Block, values.Length - start)))
            {
                var coded = low == AllZero ? 0 : reader.ReadRice(low, Escape);
                value = past.Guess(predictor) + ((long)(coded >> 1) ^ -(long)(coded & 1));
                past.Learn(value);
            }
        }
    }

    private const int Predictors = 4;

    private static void WriteBlock(BitWriter writer, ReadOnlySpan<long> block, ref Past past, Span<ulong> left)
    {
        for (var i = 0; i < block.Length; i++)
        {
            for (var predictor = 0; predictor < Predictors; predictor++)
            {
                var rest = block[i] - past.Guess(predictor);
                left[(predictor * Block) + i] = (ulong)(rest << 1) ^ (ulong)(rest >> 63);
            }

            past.Learn(block[i]);
        }

        var (best, bestLow, bestBits) = (0, 0, long.MaxValue);
        for (var predictor = 0; predictor < Predictors; predictor++)
        {
            var (low, bits) = Cheapest(left.Slice(predictor * Block, block.Length));
            if (bits < bestBits)
            {
                (best, bestLow, bestBits) = (predictor, low, bits);
            }
        }

        writer.Write((ulong)best, 2);
        writer.Write((ulong)bestLow, 5);
        if (bestLow == AllZero)
        {
            return;
        }

        foreach (var coded in left.Slice(best * Block, block.Length))
        {
            WriteRice(writer, coded, bestLow);
        }
    }

    private static void WriteRice(BitWriter writer, ulong coded, int low)
    {
        var ones = coded >> low;
        if (ones >= Escape)
        {
            writer.Write((1UL << Escape) - 1, Escape);
            writer.Write(coded, 64);
            return;
        }

        writer.Write(((1UL << (int)ones) - 1) << 1, (int)ones + 1);
        writer.Write(coded, low);
    }

    private static (int Low, long Bits) Cheapest(ReadOnlySpan<ulong> left)
    {
        double sum = 0;
        foreach (var coded in left)
        {
            sum += coded;
        }

        if (sum == 0)
        {
            return (AllZero, 0);
        }

        // ln 2 of the mean is the best divisor for a geometric spread; its neighbours are tried because noise is not geometric.
        var middle = BitOperations.Log2((ulong)Math.Min((sum / left.Length * 0.69) + 1, 1e15));
        var (best, bestBits) = (0, long.MaxValue);
        for (var low = Math.Max(0, middle - 1); low <= Math.Min(AllZero - 1, middle + 1); low++)
        {
            long bits = 0;
            foreach (var coded in left)
            {
                var ones = coded >> low;
                bits += ones >= Escape ? EscapeBits : (long)ones + 1 + low;
            }

            if (bits < bestBits)
            {
                (best, bestBits) = (low, bits);
            }
        }

        return (best, bestBits);
    }

    /// <summary>What both sides know when they guess the next number. All predictors learn from every number.</summary>
    private struct Past(long first)
    {
        private long _last = first;
        private long _lastButOne = first;
        private long _eights = first << 3;
        private long _thirtySeconds = first << 5;

        public readonly long Guess(int predictor) => predictor switch
        {
            0 => _last,
            1 => (2 * _last) - _lastButOne,
            2 => (_eights + 4) >> 3,
            _ => (_thirtySeconds + 16) >> 5,
        };

        public void Learn(long value)
        {
            _lastButOne = _last;
            _last = value;
            _eights += value - (_eights >> 3);
            _thirtySeconds += value - (_thirtySeconds >> 5);
        }
    }
}
