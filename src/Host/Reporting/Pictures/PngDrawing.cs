using SkiaSharp;

namespace Lampwarden.Host.Reporting.Pictures;

/// <summary>
/// A picture for an HTML page. Pixels rather than SVG: the SVG canvas of SkiaSharp 3.119 drops dashes, and the band is told
/// from the trace by its dashes.
/// </summary>
public static class PngDrawing
{
    // Enough for 270 dots an inch on paper.
    private const float PixelsPerPoint = 3.2f;

    /// <summary>Draws a picture of the given size in points.</summary>
    /// <returns>A data address that an image element can show.</returns>
    public static string Of(IPicture picture, float width, float height)
    {
        using var surface = SKSurface.Create(new SKImageInfo((int)(width * PixelsPerPoint), (int)(height * PixelsPerPoint)));
        surface.Canvas.Scale(PixelsPerPoint);
        picture.Draw(surface.Canvas, width, height);
        using var image = surface.Snapshot();
        using var png = image.Encode(SKEncodedImageFormat.Png, 100);
        return $"data:image/png;base64,{Convert.ToBase64String(png.AsSpan())}";
    }
}
