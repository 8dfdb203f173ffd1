using System.Text;
using CsCheck;
using Lampwarden.Acquisition.Protocol;

namespace Lampwarden.Acquisition.Tests.Protocol;

public sealed class LineSplitterTests
{
    [Fact]
    public void TryRead_EveryKindOfLineEnd_GivesTheSameLines()
    {
        var lines = Split(new LineSplitter(), "one\ntwo\r\nthree\rfour\n\r\n\r five \n");

        Assert.Equal(["one", "two", "three", "four", " five "], lines);
    }

    [Fact]
    public void TryRead_AnyPieces_GiveTheSameLinesAsOnePiece() =>
        Gen.Select(Gen.Char["ab\r\n"].Array[0, 400], Gen.Int[1, 7].Array[1, 50]).Sample((bytes, sizes) =>
        {
            var text = new string(bytes);
            var expected = text.Split(['\n', '\r'], StringSplitOptions.RemoveEmptyEntries);
            var endsOpen = text.Length > 0 && text[^1] is not ('\n' or '\r');
            Assert.Equal(endsOpen ? expected[..^1] : expected, Split(new LineSplitter(), text, sizes));
        });

    [Fact]
    public void TryRead_LineBeyondTheLimit_IsToldOnceAndTheNextLineIsWhole()
    {
        var splitter = new LineSplitter(longest: 16);

        var lines = Split(splitter, "short\n" + new string('x', 1_000_000) + "\nafter\n", [977]);

        Assert.Equal(["short", "<too long>", "after"], lines);
        Assert.Equal(0, splitter.PendingBytes);
    }

    [Fact]
    public void TryRead_LineInPieces_CarriesTheArrivalOfItsFirstByteAndOfItsEnd()
    {
        var splitter = new LineSplitter();
        Feed(splitter, "ab", 10);
        Assert.False(splitter.TryRead(out _, out _, out _, out _));
        Feed(splitter, "c", 11);
        Assert.False(splitter.TryRead(out _, out _, out _, out _));
        Feed(splitter, "d\nef\ng", 12);

        Assert.True(splitter.TryRead(out var line, out var first, out var last, out _));
        Assert.Equal(("abcd", 10, 12), (Encoding.ASCII.GetString(line), first, last));
        Assert.True(splitter.TryRead(out line, out first, out last, out _));
        Assert.Equal(("ef", 12, 12), (Encoding.ASCII.GetString(line), first, last));
        Assert.False(splitter.TryRead(out _, out _, out _, out _));
        Feed(splitter, "h\n", 13);
        Assert.True(splitter.TryRead(out line, out first, out last, out _));
        Assert.Equal(("gh", 12, 13), (Encoding.ASCII.GetString(line), first, last));
    }

    [Fact]
    public void DropPending_HalfALine_IsNotGluedToTheNext()
    {
        var splitter = new LineSplitter();
        Assert.Empty(Split(splitter, "+4.1"));

        Assert.Equal(4, splitter.DropPending());

        Assert.Equal(["2.5"], Split(splitter, "2.5\n"));
    }

    [Fact]
    public void TryRead_OtherLineEnds_AreTakenFromTheConfiguration() =>
        Assert.Equal(["a\nb", "c"], Split(new LineSplitter(lineEnd: ";\u0003"), "a\nb;c\u0003d"));

    private static List<string> Split(LineSplitter splitter, string text, int[]? sizes = null)
    {
        var lines = new List<string>();
        var bytes = Encoding.Latin1.GetBytes(text);
        for (int at = 0, piece = 0; at < bytes.Length; piece++)
        {
            var room = splitter.Free();
            var count = Math.Min(Math.Min(sizes is null ? bytes.Length : sizes[piece % sizes.Length], bytes.Length - at), room.Length);
            bytes.AsSpan(at, count).CopyTo(room.Span);
            splitter.Received(count, piece);
            at += count;
            while (splitter.TryRead(out var line, out _, out _, out var tooLong))
            {
                lines.Add(tooLong ? "<too long>" : Encoding.Latin1.GetString(line));
            }
        }

        return lines;
    }

    private static void Feed(LineSplitter splitter, string text, long stamp)
    {
        Encoding.Latin1.GetBytes(text).CopyTo(splitter.Free());
        splitter.Received(text.Length, stamp);
    }
}
