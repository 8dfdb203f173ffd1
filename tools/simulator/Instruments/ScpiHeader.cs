namespace Lampwarden.Simulator.Instruments;

/// <summary>
/// Matches command headers against the notation of SCPI manuals: capitals are the short form, the whole word is the long form, nothing between
/// counts; nodes in brackets may be left out.
/// </summary>
internal static class ScpiHeader
{
    /// <summary>The header, without leading colon and question mark, is the one the notation describes.</summary>
    public static bool Matches(string notation, string header)
    {
        var nodes = notation.Replace("[:", ":[", StringComparison.Ordinal).Replace(":]", "]:", StringComparison.Ordinal).Split(':', StringSplitOptions.RemoveEmptyEntries);
        return Match(nodes, header.Split(':'));
    }

    private static bool Match(ReadOnlySpan<string> nodes, ReadOnlySpan<string> words)
    {
        if (nodes.IsEmpty)
        {
            return words.IsEmpty;
        }

        if (nodes[0].StartsWith('['))
        {
            return (!words.IsEmpty && IsNode(nodes[0][1..^1], words[0]) && Match(nodes[1..], words[1..])) || Match(nodes[1..], words);
        }

        return !words.IsEmpty && IsNode(nodes[0], words[0]) && Match(nodes[1..], words[1..]);
    }

    private static bool IsNode(string node, string word) =>
        word.Equals(node, StringComparison.OrdinalIgnoreCase)
        || word.Equals(string.Concat(node.TakeWhile(char.IsAsciiLetterUpper)), StringComparison.OrdinalIgnoreCase);
}
