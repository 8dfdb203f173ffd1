using ScottPlot;
using SkiaSharp;

namespace Lampwarden.Host.Reporting.Pictures;

/// <summary>The embedded fonts, for our own layout and for ScottPlot. No font of the system is needed.</summary>
public static class ReportFonts
{
    /// <summary>The family's name.</summary>
    public const string Family = "Open Sans";

    /// <summary>For running text.</summary>
    public static SKTypeface Regular { get; } = Load("OpenSans-Regular.ttf");

    /// <summary>For headings and what must stand out.</summary>
    public static SKTypeface Bold { get; } = Load("OpenSans-Semibold.ttf");

    /// <summary>Makes ScottPlot draw with them.</summary>
    public static void Register()
    {
        lock (Gate)
        {
            if (!Fonts.FontResolvers.OfType<Resolver>().Any())
            {
                Fonts.FontResolvers.Insert(0, new Resolver());
            }
        }
    }

    private static readonly Lock Gate = new();

    private static SKTypeface Load(string file)
    {
        var assembly = typeof(ReportFonts).Assembly;
        var name = assembly.GetManifestResourceNames().Single(resource => resource.EndsWith(file, StringComparison.Ordinal));
        using var stream = assembly.GetManifestResourceStream(name)!;
        using var data = SKData.Create(stream);
        return SKTypeface.FromData(data);
    }

    private sealed class Resolver : IFontResolver
    {
        public SKTypeface? CreateTypeface(string fontName, bool bold, bool italic) =>
            fontName == Family ? bold ? Bold : Regular : null;

        public SKTypeface? CreateTypeface(string fontName, FontWeight weight, FontSlant slant, FontSpacing spacing) =>
            CreateTypeface(fontName, weight >= FontWeight.SemiBold, false);
    }
}
