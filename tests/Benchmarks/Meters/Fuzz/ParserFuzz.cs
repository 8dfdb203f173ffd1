using Lampwarden.Acquisition;
using Lampwarden.Acquisition.Protocol;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Fuzzing;

/// <summary>Random and spoilt lines through every parser, each answer held against a second opinion.</summary>
internal static class ParserFuzz
{
    /// <summary>What came of so many lines.</summary>
    /// <param name="Parser">Which.</param>
    /// <param name="Lines">How many went in.</param>
    /// <param name="Numbers">How many were taken for numbers, rightly.</param>
    /// <param name="Wrong">The first line of which the two opinions differ; null when none.</param>
    public sealed record Outcome(string Parser, long Lines, long Numbers, string? Wrong);

    /// <summary>Every parser in turn.</summary>
    public static IEnumerable<Outcome> Run(long lines, int seed)
    {
        yield return Run("scpi", lines, seed, new ScpiAnswer(0), noise => Noise.Ascii(noise.Number()), SecondOpinion.Scpi);
        foreach (var dialect in LineDialect.Names)
        {
            var meter = new MeterOptions { Name = "fuzz", Protocol = { Kind = "lines", Pattern = LineDialect.Pattern(dialect) } };
            meter.Protocol.RefuseWords = SecondOpinion.RefuseWords(dialect);
            yield return Run(dialect, lines, seed, new LinePattern(meter),
                noise => Noise.Ascii(LineDialect.Write(dialect, MeasuredQuantity.LineCurrent, noise.Random.Next(20) == 0 ? double.PositiveInfinity : noise.Random.NextDouble() * 9, 0.0001)),
                line => SecondOpinion.Dialect(dialect, line));
        }

        yield return Splitter(lines, seed);
    }

    private delegate double Opinion(ReadOnlySpan<byte> line);

    private static Outcome Run(string name, long lines, int seed, IValueReader reader, Func<Noise, byte[]> good, Opinion second)
    {
        var noise = new Noise(seed);
        var numbers = 0L;
        for (var count = 0L; count < lines; count++)
        {
            var line = (count % 8) switch
            {
                0 => noise.Bytes(80),
                1 => noise.Soup(40),
                2 => good(noise),
                _ => noise.Spoil(good(noise)),
            };
            var value = reader.Read(line);
            var opinion = second(line);
            var number = value.Kind == MeterEventKind.Reading;
            if (number ? !SecondOpinion.Agree(value.Value, opinion) : !double.IsNaN(value.Value) || !double.IsNaN(opinion))
            {
                return new Outcome(name, count, numbers, $"{Excerpt.Of(line)}: {value.Kind} {value.Value:R} {value.Detail}, second opinion {opinion:R}");
            }

            numbers += number ? 1 : 0;
        }

        return new Outcome(name, lines, numbers, null);
    }

    // Lines cut at random places must come out as a plain split gives them; those beyond the limit are told once and left out.
    private static Outcome Splitter(long lines, int seed)
    {
        const int Longest = 64;
        var noise = new Noise(seed);
        var splitter = new LineSplitter(Longest);
        var expected = new Queue<byte[]?>();
        var (count, kept) = (0L, 0L);
        while (count < lines)
        {
            var line = noise.Random.Next(10) == 0 ? noise.Bytes(300) : noise.Soup(60);
            line = [.. line.Where(one => one is not ((byte)'\r' or (byte)'\n')), (byte)(noise.Random.Next(2) == 0 ? '\r' : '\n')];
            if (line.Length > 1)
            {
                expected.Enqueue(line.Length - 1 > Longest ? null : line[..^1]);
                count++;
            }

            for (var at = 0; at < line.Length;)
            {
                var room = splitter.Free();
                var size = Math.Min(noise.Random.Next(1, 40), Math.Min(room.Length, line.Length - at));
                line.AsSpan(at, size).CopyTo(room.Span);
                splitter.Received(size, count);
                at += size;
                while (splitter.TryRead(out var found, out _, out _, out var tooLong))
                {
                    var due = expected.Dequeue();
                    if (tooLong != (due is null) || (due is not null && !found.SequenceEqual(due)))
                    {
                        return new Outcome("splitter", count, kept, Excerpt.Of(found));
                    }

                    kept += tooLong ? 0 : 1;
                }
            }
        }

        return new Outcome("splitter", count, kept, expected.Count == 0 ? null : $"{expected.Count} lines never came out");
    }
}
