using System.Globalization;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;
using Lampwarden.Host.Reporting.Pictures;
using SkiaSharp;

namespace Lampwarden.Host.Picturing;

/// <summary>
/// One sheet for the wall over the bench: the lamps' curves, where bank and unit meet, the switch-on with what the meter will show, and the
/// lamps lighting up in their order.
/// </summary>
public sealed class PredictionPicture
{
    private const float Width = 1600;
    private const float Height = 1130;
    private const float Head = 104;
    private const float Foot = 46;

    private readonly Mains _mains;
    private readonly Bank _bank;
    private readonly BenchPrediction _prediction;
    private readonly PredictionPanels _panels;

    /// <summary>Works out what is to be drawn.</summary>
    public PredictionPicture(Mains mains, Bank bank, Unit unit, PredictionSettings settings)
    {
        (_mains, _bank) = (mains, bank);
        _prediction = Predictor.Predict(mains, bank, unit, settings with { WithIntervals = false }, out var healthy, out var shorted);
        _panels = new PredictionPanels(mains, bank, _prediction, new BenchCurves(mains, bank, unit), healthy, shorted, settings.Meter);
    }

    /// <summary>Writes the sheet; the ending of the name decides: svg or png.</summary>
    /// <exception cref="Commands.BadInputException">The name ends in neither.</exception>
    public void Save(string file)
    {
        var ending = Path.GetExtension(file).ToLowerInvariant();
        if (ending is not (".svg" or ".png"))
        {
            throw new Commands.BadInputException($"--picture {file}: expected a name ending in .svg or .png.");
        }

        // Drawn first, written after: a fault in drawing leaves no half file.
        using var memory = new MemoryStream();
        if (ending == ".svg")
        {
            using var canvas = SKSvgCanvas.Create(SKRect.Create(Width, Height), memory);
            Draw(canvas);
        }
        else
        {
            using var surface = SKSurface.Create(new SKImageInfo((int)Width, (int)Height));
            Draw(surface.Canvas);
            using var image = surface.Snapshot();
            using var data = image.Encode(SKEncodedImageFormat.Png, 100);
            data.SaveTo(memory);
        }

        File.WriteAllBytes(file, memory.ToArray());
    }

    private void Draw(SKCanvas canvas)
    {
        ReportFonts.Register();
        canvas.Clear(SKColors.White);
        var (half, tall) = (Width / 2, (Height - Head - Foot) / 2);
        Text(canvas, $"{_prediction.Unit.Text}  behind  {_bank.Text}  at {_mains}", 28, 44, 27, ReportFonts.Bold, SKColors.Black);
        Text(canvas, Summary(), 28, 80, 20, ReportFonts.Regular, new SKColor(0x33, 0x33, 0x33));
        _panels.Curves().Render(canvas, Rectangle(0, Head, half, tall));
        _panels.Meeting().Render(canvas, Rectangle(half, Head, half, tall));
        _panels.SwitchOn().Render(canvas, Rectangle(0, Head + tall, half, tall));
        _panels.Lighting().Render(canvas, Rectangle(half, Head + tall, half, tall));
        Text(
            canvas,
            "A lamp limiter does not isolate: all behind it stays live. Lamps get hot. This sheet is a prediction, never a protection.",
            28, Height - 17, 16, ReportFonts.Regular, new SKColor(0x8a, 0x1c, 0x1c));
        canvas.Flush();
    }

    private string Summary()
    {
        var it = _prediction;
        return it.Steady.Exists
            ? string.Create(CultureInfo.InvariantCulture, $"Settled meter {Amps(it.Band.LowAmps)} to {Amps(it.Band.HighAmps)}.   First reading up to {Amps(it.Inrush.FirstReadingAmps)}.   Unit gets {it.Steady.UnitVolts:0} V.   Shorted: {Amps(it.Shorted.LineAmps)}, {it.Contrast:0.0} times as much.")
            : $"This bank cannot run this unit.   Shorted: {Amps(it.Shorted.LineAmps)}.";
    }

    internal static string Amps(double amps) => amps < 0.9995
        ? string.Create(CultureInfo.InvariantCulture, $"{1000 * amps:0} mA")
        : string.Create(CultureInfo.InvariantCulture, $"{amps:0.00} A");

    private static ScottPlot.PixelRect Rectangle(float left, float top, float width, float height) => new(left, left + width, top + height, top);

    private static void Text(SKCanvas canvas, string text, float x, float y, float size, SKTypeface face, SKColor colour)
    {
        using var font = new SKFont(face, size);
        using var paint = new SKPaint { Color = colour, IsAntialias = true };

        // A long bank must not run off the sheet.
        var width = font.MeasureText(text);
        if (width > Width - 2 * x)
        {
            font.Size *= (Width - 2 * x) / width;
        }

        canvas.DrawText(text, x, y, font, paint);
    }
}
