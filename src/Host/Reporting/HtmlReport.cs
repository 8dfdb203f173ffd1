using System.Globalization;
using System.Text.Encodings.Web;
using Fluid;
using Lampwarden.Host.Reporting.Pdf;
using Lampwarden.Host.Reporting.Pictures;

namespace Lampwarden.Host.Reporting;

/// <summary>A report as one HTML file that fetches nothing. The page's shape stands in Html/report.liquid; all text is encoded.</summary>
public static class HtmlReport
{
    private const float PictureWidth = 560;

    private static readonly Lazy<IFluidTemplate> Template = new(Parse);

    /// <summary>The whole page.</summary>
    public static string Write(ReportContent content, Paper paper)
    {
        var context = new TemplateContext(
            new Dictionary<string, object?>
            {
                ["run"] = content.Run,
                ["title"] = content.Title,
                ["subtitle"] = content.Subtitle,
                ["verdict"] = content.Verdict,
                ["reasons"] = content.Reasons,
                ["sections"] = content.Sections.Select(section => new Dictionary<string, object?>
                {
                    ["heading"] = section.Heading,
                    ["blocks"] = section.Blocks.Select(Model).ToList(),
                }).ToList(),
                ["sha256"] = content.ReadingsSha256,
                ["mark"] = ReportVerification.Mark,
                ["software"] = content.Software,
                ["paper"] = paper.Name,
                ["made"] = content.Made.UtcDateTime.ToString("yyyy-MM-dd HH:mm 'UTC'", CultureInfo.InvariantCulture),
            },
            new TemplateOptions { CultureInfo = CultureInfo.InvariantCulture });
        return Template.Value.Render(context, HtmlEncoder.Default);
    }

    private static Dictionary<string, object?> Model(ReportBlock block) => block switch
    {
        ReportText text => new() { ["kind"] = "text", ["text"] = text.Text, ["small"] = text.Small },
        ReportList list => new() { ["kind"] = "list", ["items"] = list.Items },
        ReportFacts facts => new()
        {
            ["kind"] = "facts",
            ["facts"] = facts.Facts.Select(fact => new Dictionary<string, object?> { ["label"] = fact.Label, ["value"] = fact.Value }).ToList(),
        },
        ReportTable table => new()
        {
            ["kind"] = "table", ["headers"] = Cells(table, table.Headers), ["rows"] = table.Rows.Select(row => Cells(table, row)).ToList(),
        },
        ReportPicture picture => new()
        {
            ["kind"] = "picture", ["caption"] = picture.Caption,
            ["source"] = PngDrawing.Of(picture.Picture, PictureWidth, PictureWidth * (float)picture.Height),
        },
        ReportPhoto photo => new()
        {
            ["kind"] = "photo", ["caption"] = photo.Caption, ["source"] = $"data:{photo.MediaType};base64,{Convert.ToBase64String(photo.Bytes)}",
        },
        ReportSignature signature => new() { ["kind"] = "signature", ["name"] = signature.Name, ["date"] = signature.Date },
        _ => throw new ArgumentOutOfRangeException(nameof(block), block, "a block that cannot be written"),
    };

    private static List<Dictionary<string, object?>> Cells(ReportTable table, IReadOnlyList<string> row) =>
        [.. row.Select((cell, index) => new Dictionary<string, object?> { ["text"] = cell, ["numeric"] = table.Numeric.Contains(index) })];

    private static IFluidTemplate Parse()
    {
        var assembly = typeof(HtmlReport).Assembly;
        var name = assembly.GetManifestResourceNames().Single(resource => resource.EndsWith("report.liquid", StringComparison.Ordinal));
        using var reader = new StreamReader(assembly.GetManifestResourceStream(name)!);
        return new FluidParser().TryParse(reader.ReadToEnd(), out var template, out var fault)
            ? template
            : throw new InvalidOperationException($"The report's template is broken: {fault}");
    }
}
