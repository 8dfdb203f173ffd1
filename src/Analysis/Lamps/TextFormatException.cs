namespace Lampwarden.Analysis.Lamps;

/// <summary>
/// A bank, unit or mains text that cannot be read. The message shows the text, marks the place, and says what was expected there.
/// </summary>
public sealed class TextFormatException : FormatException
{
    /// <param name="message">The whole message.</param>
    /// <param name="input">The text as given.</param>
    /// <param name="position">Zero-based place of the fault in <paramref name="input"/>.</param>
    public TextFormatException(string message, string input, int position)
        : base(message)
    {
        Input = input;
        Position = position;
    }

    /// <summary>The text as given.</summary>
    public string Input { get; }

    /// <summary>Zero-based place of the fault in <see cref="Input"/>; its length where the text ended too early.</summary>
    public int Position { get; }
}
