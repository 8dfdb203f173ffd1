namespace Lampwarden.Host.Reporting.Pdf;

/// <summary>A sheet, in points of 1/72 inch.</summary>
public sealed record Paper(string Name, float Width, float Height)
{
    /// <summary>ISO 216: 210 mm by 297 mm.</summary>
    public static readonly Paper A4 = new("a4", 595.28f, 841.89f);

    /// <summary>8.5 by 11 inches.</summary>
    public static readonly Paper Letter = new("letter", 612, 792);
}
