using SkiaSharp;

namespace Lampwarden.Host.Reporting.Pictures;

/// <summary>Something that draws itself in a box of points, on paper or for the screen.</summary>
public interface IPicture
{
    /// <summary>Draws into the box from (0, 0).</summary>
    void Draw(SKCanvas canvas, float width, float height);
}
