using Lampwarden.Host.Reporting.Pictures;
using SkiaSharp;

namespace Lampwarden.Host.Reporting.Pdf;

/// <summary>Measures, breaks and draws text. Sizes in points.</summary>
internal sealed class TextSetter : IDisposable
{
    private readonly Dictionary<(float Size, bool Bold), SKFont> _fonts = [];
    private readonly SKPaint _ink = new() { Color = SKColors.Black, IsAntialias = true };

    public static float LineHeight(float size) => size * 1.38f;

    public float Measure(string text, float size, bool bold = false) => Font(size, bold).MeasureText(text);

    public void Draw(SKCanvas canvas, string text, float x, float baseline, float size, bool bold = false, SKTextAlign align = SKTextAlign.Left, SKColor? colour = null)
    {
        _ink.Color = colour ?? SKColors.Black;
        canvas.DrawText(text, x, baseline, align, Font(size, bold), _ink);
    }

    /// <summary>Breaks at spaces; a word wider than a line is broken where it must be.</summary>
    public List<string> Break(string text, float width, float size, bool bold = false)
    {
        var lines = new List<string>();
        foreach (var paragraph in text.Split('\n'))
        {
            var line = "";
            foreach (var word in paragraph.Split(' ').SelectMany(word => Fit(word, width, size, bold)))
            {
                var longer = line.Length == 0 ? word : $"{line} {word}";
                if (line.Length > 0 && Measure(longer, size, bold) > width)
                {
                    lines.Add(line);
                    longer = word;
                }

                line = longer;
            }

            lines.Add(line);
        }

        return lines;
    }

    public void Dispose()
    {
        foreach (var font in _fonts.Values)
        {
            font.Dispose();
        }

        _ink.Dispose();
    }

    private IEnumerable<string> Fit(string word, float width, float size, bool bold)
    {
        while (word.Length > 1 && Measure(word, size, bold) > width)
        {
            var length = word.Length - 1;
            while (length > 1 && Measure(word[..length], size, bold) > width)
            {
                length--;
            }

            yield return word[..length];
            word = word[length..];
        }

        yield return word;
    }

    private SKFont Font(float size, bool bold)
    {
        if (!_fonts.TryGetValue((size, bold), out var font))
        {
            font = new SKFont(bold ? ReportFonts.Bold : ReportFonts.Regular, size) { Subpixel = true, LinearMetrics = true, Hinting = SKFontHinting.None };
            _fonts[(size, bold)] = font;
        }

        return font;
    }
}
