using System.Numerics;

namespace Lampwarden.Benchmarks.Detection;

/// <summary>
/// The generator all corpora are drawn from: xoshiro256** (Blackman and Vigna 2018) seeded by splitmix64, normals by Marsaglia's polar method.
/// Named and written out because a corpus must be the same on every machine and in every year.
/// </summary>
public sealed class Xoshiro256
{
    private ulong s0, s1, s2, s3;
    private double spare = double.NaN;

    public Xoshiro256(ulong seed)
    {
        s0 = SplitMix64(ref seed);
        s1 = SplitMix64(ref seed);
        s2 = SplitMix64(ref seed);
        s3 = SplitMix64(ref seed);
    }

    public Xoshiro256(ulong a, ulong b, ulong c, ulong d) => (s0, s1, s2, s3) = (a, b, c, d);

    /// <summary>A stream of its own for one part of one run, so that taking a part away leaves the others as they were.</summary>
    public static Xoshiro256 For(int corpus, int run, int part)
    {
        var state = ((ulong)(uint)corpus << 40) ^ ((ulong)(uint)run << 12) ^ (uint)part;
        return new Xoshiro256(SplitMix64(ref state));
    }

    public static ulong SplitMix64(ref ulong state)
    {
        var z = state += 0x9E3779B97F4A7C15;
        z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9;
        z = (z ^ (z >> 27)) * 0x94D049BB133111EB;
        return z ^ (z >> 31);
    }

    public ulong Next()
    {
        var result = BitOperations.RotateLeft(s1 * 5, 7) * 9;
        var t = s1 << 17;
        s2 ^= s0;
        s3 ^= s1;
        s1 ^= s2;
        s0 ^= s3;
        s2 ^= t;
        s3 = BitOperations.RotateLeft(s3, 45);
        return result;
    }

    /// <summary>Uniform in [0, 1), 53 bits.</summary>
    public double Unit() => (Next() >> 11) * (1.0 / (1UL << 53));

    public double Uniform(double low, double high) => low + ((high - low) * Unit());

    public double LogUniform(double low, double high) => low * Math.Exp(Math.Log(high / low) * Unit());

    public double Sign() => (Next() >> 63) == 0 ? 1 : -1;

    /// <summary>Waiting time of a Poisson process.</summary>
    public double Exponential(double mean) => -mean * Math.Log(1 - Unit());

    public double Normal()
    {
        if (!double.IsNaN(spare))
        {
            (var kept, spare) = (spare, double.NaN);
            return kept;
        }

        while (true)
        {
            var (u, v) = ((2 * Unit()) - 1, (2 * Unit()) - 1);
            var s = (u * u) + (v * v);
            if (s is > 0 and < 1)
            {
                var factor = Math.Sqrt(-2 * Math.Log(s) / s);
                spare = v * factor;
                return u * factor;
            }
        }
    }

    /// <summary>Student's t with 5 degrees of freedom, scaled to unit variance.</summary>
    public double HeavyTailed()
    {
        var chi = 0.0;
        for (var i = 0; i < 5; i++)
        {
            var n = Normal();
            chi += n * n;
        }

        return Normal() / Math.Sqrt(chi / 5) * Math.Sqrt(3.0 / 5);
    }
}
