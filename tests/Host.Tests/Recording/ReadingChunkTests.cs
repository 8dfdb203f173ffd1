using CsCheck;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Recording.Packing;

namespace Lampwarden.Host.Tests.Recording;

public sealed class ReadingChunkTests
{
    private static readonly Gen<double> AnyAmps = Gen.Frequency(
        (6, Gen.Int[0, 9_999_999].Select(whole => whole / 1e6)),
        (1, Gen.Double),
        (1, Gen.Const(double.PositiveInfinity)),
        (1, Gen.Const(double.NaN)),
        (1, Gen.OneOf(Gen.Const(0.0), Gen.Const(1e9), Gen.Const(-3.25), Gen.Const(123456.789), Gen.Const(double.Epsilon), Gen.Const(1e300))));

    private static readonly Gen<LineReading> AnyReading =
        from step in Gen.Long[0, 10_000_000_000]
        from amps in AnyAmps
        from decimals in Gen.Int[-1, 7]
        from volts in Gen.OneOf(Gen.Const(double.NaN), Gen.Int[0, 3000].Select(tenths => tenths / 10.0))
        select new LineReading(step / 1000.0, amps, decimals, volts, 1);

    [Fact]
    public void Pack_AnyReadings_ComeBackTheSame() => AnyReading.Array[0, 700].Sample(readings =>
        Assert.Equal(readings, ReadingChunk.Unpack(ReadingChunk.Pack(readings))));

    [Fact]
    public void Unpack_AnyBitTurned_IsRefused()
    {
        var packed = ReadingChunk.Pack([.. Enumerable.Range(0, 200).Select(i => new LineReading(i * 0.1, 0.41 + (i % 7 * 0.001), 3))]);
        for (var bit = 0; bit < packed.Length * 8; bit++)
        {
            var damaged = (byte[])packed.Clone();
            damaged[bit / 8] ^= (byte)(1 << (bit % 8));
            Assert.Throws<InvalidDataException>(() => ReadingChunk.Unpack(damaged));
        }
    }

    [Theory]
    [InlineData(0.4123, 4)]
    [InlineData(0.41, 4)] // sent as 0.4100: the zeros are digits too
    [InlineData(12, 0)]
    public void LineReading_DecimalsAsSent_AreKept(double amps, int decimals)
    {
        var kept = ReadingChunk.Unpack(ReadingChunk.Pack([new LineReading(1, amps, decimals)]))[0];
        Assert.Equal((amps, decimals), (kept.Amps, kept.Decimals));
    }

    [Fact]
    public void LineReading_MilliampereAnswer_BecomesTheNearestDouble()
    {
        // 412.3 mA scaled by 1e-3 is not the double nearest to 0.4123.
        var scaled = 412.7 * 1e-3;
        var reading = new LineReading(0, scaled, 4);
        Assert.Equal(0.4127, reading.Amps);
    }

    [Fact]
    public void Pack_SettledTwelveHours_TakesUnderTwoAndAHalfBytesAReading()
    {
        // The measure is the file in the benchmarks; here the codec alone, so that a slip shows at once.
        var random = new Random(6);
        var readings = new LineReading[16_384];
        for (var i = 0; i < readings.Length; i++)
        {
            var noise = random.NextDouble() + random.NextDouble() + random.NextDouble() - 1.5;
            readings[i] = new LineReading((i * 0.1) + (random.Next(-2, 3) * 0.001), Math.Round(0.412345 + (noise * 2e-4), 6), 6);
        }

        var bytes = (double)ReadingChunk.Pack(readings).Length / readings.Length;
        Assert.InRange(bytes, 0.5, 2.0);
    }
}
