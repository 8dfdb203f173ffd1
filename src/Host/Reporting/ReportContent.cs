namespace Lampwarden.Host.Reporting;

/// <summary>What a report says, before any layout: the PDF and the HTML are two renderings of one of these.</summary>
/// <param name="Verdict">As it is printed: PASSED, FAILED, INCOMPLETE or GOING ON.</param>
/// <param name="Reasons">The verdict's sentences, the weightiest first.</param>
/// <param name="ReadingsSha256">Over the run's CSV export, lower-case hexadecimal.</param>
/// <param name="Made">When the report was made, UTC.</param>
public sealed record ReportContent(
    string Run,
    string Title,
    string Subtitle,
    string Verdict,
    IReadOnlyList<string> Reasons,
    IReadOnlyList<ReportSection> Sections,
    string ReadingsSha256,
    string Software,
    DateTimeOffset Made);

/// <summary>A headed part of a report.</summary>
public sealed record ReportSection(string Heading, IReadOnlyList<ReportBlock> Blocks);

/// <summary>A piece of a section.</summary>
public abstract record ReportBlock;

/// <summary>Running text.</summary>
/// <param name="Small">Set small: footnotes and explanations.</param>
public sealed record ReportText(string Text, bool Small = false) : ReportBlock;

/// <summary>Sentences with bullets.</summary>
public sealed record ReportList(IReadOnlyList<string> Items) : ReportBlock;

/// <summary>Label and value pairs, in two columns where there is room.</summary>
public sealed record ReportFacts(IReadOnlyList<(string Label, string Value)> Facts) : ReportBlock;

/// <summary>A table. Widths are shares of the page's width and need not sum to one; columns named numeric are set to the right.</summary>
public sealed record ReportTable(
    IReadOnlyList<string> Headers, IReadOnlyList<double> Widths, IReadOnlyList<IReadOnlyList<string>> Rows, IReadOnlySet<int> Numeric) : ReportBlock;

/// <summary>A drawn picture, rendered as vectors in both forms.</summary>
/// <param name="Height">Share of its width.</param>
public sealed record ReportPicture(Pictures.IPicture Picture, double Height, string Caption) : ReportBlock;

/// <summary>A photograph a technician attached.</summary>
public sealed record ReportPhoto(byte[] Bytes, string MediaType, string Caption) : ReportBlock;

/// <summary>Lines to sign on.</summary>
/// <param name="Name">Typed name; null leaves the line empty.</param>
/// <param name="Date">Date of the typed signature; null leaves the line empty.</param>
public sealed record ReportSignature(string? Name, string? Date) : ReportBlock;
