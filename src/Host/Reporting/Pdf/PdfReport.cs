using System.Globalization;
using SkiaSharp;

namespace Lampwarden.Host.Reporting.Pdf;

/// <summary>A report on paper. All black, greys and rules: a black and white printer loses nothing.</summary>
public static class PdfReport
{
    private static readonly SKColor Faint = new(0x55, 0x55, 0x55);

    /// <summary>Writes the document.</summary>
    public static void Write(Stream stream, ReportContent content, Paper paper)
    {
        using var text = new TextSetter();
        using var flow = new PageFlow(paper);
        var blocks = new BlockSetter(flow, text);
        Head(flow, text, content);
        foreach (var section in content.Sections)
        {
            blocks.Set(section);
        }

        var pages = flow.End();
        using var document = SKDocument.CreatePdf(stream, new SKDocumentPdfMetadata
        {
            Title = $"{content.Title} {content.Run}",
            Subject = content.Subtitle,
            Author = "",
            Creator = content.Software,
            // 'report --verify' finds the check sum here.
            Keywords = $"{ReportVerification.Mark}{content.ReadingsSha256}",
            Creation = content.Made.UtcDateTime,
            Modified = content.Made.UtcDateTime,
            RasterDpi = 300,
            EncodingQuality = 90,
        });
        for (var page = 0; page < pages.Count; page++)
        {
            using var canvas = document.BeginPage(paper.Width, paper.Height);
            canvas.DrawPicture(pages[page]);
            Foot(canvas, text, content, paper, page + 1, pages.Count);
            document.EndPage();
        }

        document.Close();
    }

    private static void Head(PageFlow flow, TextSetter text, ReportContent content)
    {
        const float boxWidth = 168;
        var canvas = flow.Canvas;
        using var rule = new SKPaint { Color = SKColors.Black, StrokeWidth = 2.2f, Style = SKPaintStyle.Stroke, IsAntialias = true };
        var top = flow.Y;
        text.Draw(canvas, content.Title, flow.Left, top + 20, 22, bold: true);
        var lines = text.Break(content.Subtitle, flow.Width - boxWidth - 24, 10.5f);
        for (var i = 0; i < lines.Count; i++)
        {
            text.Draw(canvas, lines[i], flow.Left, top + 38 + (i * TextSetter.LineHeight(10.5f)), 10.5f, colour: Faint);
        }

        var box = SKRect.Create(flow.Left + flow.Width - boxWidth, top, boxWidth, 46);
        var passed = content.Verdict == "PASSED";
        using var fill = new SKPaint { Color = passed ? SKColors.Black : SKColors.White };
        canvas.DrawRect(box, fill);
        canvas.DrawRect(box, rule);
        var size = content.Verdict.Length > 8 ? 19f : 24f;
        text.Draw(canvas, content.Verdict, box.MidX, box.MidY + (size * 0.36f), size, true, SKTextAlign.Center, passed ? SKColors.White : SKColors.Black);
        flow.Down(Math.Max(54, 40 + (lines.Count * TextSetter.LineHeight(10.5f))));
        canvas.DrawLine(flow.Left, flow.Y, flow.Left + flow.Width, flow.Y, rule);
        flow.Down(8);
        foreach (var reason in content.Reasons)
        {
            foreach (var line in text.Break(reason, flow.Width, 10.5f))
            {
                flow.Down(TextSetter.LineHeight(10.5f));
                text.Draw(canvas, line, flow.Left, flow.Y - 3, 10.5f);
            }
        }

        flow.Down(4);
    }

    private static void Foot(SKCanvas canvas, TextSetter text, ReportContent content, Paper paper, int page, int pages)
    {
        var (left, right, y) = (PageFlow.Margin, paper.Width - PageFlow.Margin, paper.Height - PageFlow.Margin + 8);
        using var rule = new SKPaint { Color = Faint, StrokeWidth = 0.5f };
        canvas.DrawLine(left, y - 11, right, y - 11, rule);
        var made = content.Made.UtcDateTime.ToString("yyyy-MM-dd HH:mm 'UTC'", CultureInfo.InvariantCulture);
        text.Draw(canvas, $"{content.Title} {content.Run}, made {made} by {content.Software}", left, y, 7.5f, colour: Faint);
        text.Draw(canvas, $"page {page} of {pages}", right, y, 7.5f, align: SKTextAlign.Right, colour: Faint);
        text.Draw(canvas, $"SHA-256 of the readings {content.ReadingsSha256}", left, y + 10, 7.5f, colour: Faint);
    }
}
