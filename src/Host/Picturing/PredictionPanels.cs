using System.Globalization;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Host.Reporting.Pictures;
using ScottPlot;

namespace Lampwarden.Host.Picturing;

/// <summary>The four panels of the sheet.</summary>
internal sealed class PredictionPanels(
    Mains mains, Bank bank, BenchPrediction prediction, BenchCurves curves, SwitchOn healthy, SwitchOn shorted, PredictedMeter meter)
{
    private const double FirstGlowKelvin = 798;
    private const double LastSeconds = 5;

    // Lines are told apart by colour and weight alone: Skia's SVG canvas cannot dash.
    private static readonly Color Ink = Color.FromHex("#1a1a1a");
    private static readonly Color Amber = Color.FromHex("#d97706");
    private static readonly Color Blue = Color.FromHex("#1d5fa8");
    private static readonly Color Red = Color.FromHex("#b3261e");
    private static readonly Color Grey = Color.FromHex("#8a8a8a");
    private static readonly Color BandFill = Color.FromHex("#dcebdc");
    private static readonly Color[] LampColours =
        [Color.FromHex("#e69f00"), Color.FromHex("#009e73"), Color.FromHex("#56b4e9"), Color.FromHex("#cc79a7"), Color.FromHex("#7a5195"), Color.FromHex("#a6761d")];

    /// <summary>Current against volts: lamps, bank, and a plain resistor for comparison.</summary>
    public Plot Curves()
    {
        var plot = Fresh("A lamp is no resistor", "volts across it", "amperes");
        for (var lamp = 0; lamp < Math.Min(curves.Lamps.Count, LampColours.Length); lamp++)
        {
            Line(plot, curves.Lamps[lamp].Points, LampColours[lamp], 2, curves.Lamps[lamp].Name);
        }

        if (bank.Lamps.Count > 1)
        {
            Line(plot, curves.Bank.Points, Ink, 3.5f, "the bank");
        }

        Line(plot, curves.PlainResistor.Points, Grey, 1.8f, "plain resistor of the bank's rating");
        plot.Axes.SetLimits(0, mains.Volts * 1.02, 0, curves.ShortedAmps * 1.12);
        plot.ShowLegend(bank.Lamps.Count > 1 ? Alignment.LowerRight : Alignment.UpperLeft);
        return plot;
    }

    /// <summary>Where bank and unit meet, healthy and shorted.</summary>
    public Plot Meeting()
    {
        var plot = Fresh("Where bank and unit meet", "volts across the bank (the unit gets what is left)", "amperes");
        var top = curves.ShortedAmps * 1.25;
        Line(plot, curves.Bank.Points, Ink, 3.5f, "the bank");
        Line(plot, [.. curves.Unit.Points.Where(point => point.Amps < top * 1.05)], Blue, 2.5f, curves.Unit.Name);
        Line(plot, [(mains.Volts, 0), (mains.Volts, top)], Red, 2, "unit shorted");
        if (prediction.Steady.Exists)
        {
            // Below the bank's curve there is room: to the right of the point, or to its left where the short is near.
            var right = prediction.Steady.BankVolts < 0.6 * mains.Volts;
            Dot(
                plot, prediction.Steady.BankVolts, prediction.Steady.LineAmps, Blue, $"healthy {PredictionPicture.Amps(prediction.Steady.LineAmps)}",
                right ? Alignment.UpperLeft : Alignment.UpperRight, right ? 14 : -12, 16);
        }

        Dot(plot, mains.Volts, curves.ShortedAmps, Red, $"short {PredictionPicture.Amps(curves.ShortedAmps)}", Alignment.LowerRight, -10, -9);
        plot.Axes.SetLimits(0, mains.Volts * 1.06, 0, top);
        plot.ShowLegend(Alignment.LowerCenter, Orientation.Horizontal);
        return plot;
    }

    /// <summary>The current from the moment of switching, and what the meter makes of it.</summary>
    public Plot SwitchOn()
    {
        var plot = Fresh("Switching on, worst moment of the cycle", "seconds", "amperes");
        var readings = MeterViewReadings();
        var settled = prediction.Steady.Exists ? Math.Max(prediction.Inrush.SettleSeconds, 0) : 1;
        var until = Math.Min(Math.Clamp(1.6 * settled, Math.Max(0.5, 4.2 * meter.WindowSeconds), 4), (healthy.Amps.Count - 1) * healthy.StepSeconds);
        var steps = (int)(until / healthy.StepSeconds);
        var every = Math.Max(1, steps / 4000);
        var waves = Enumerable.Range(0, steps / every + 1).Select(step => (step * every * healthy.StepSeconds, healthy.Amps[step * every])).ToArray();
        Line(plot, waves, Amber.WithAlpha(0.75), 1, "current, instant by instant");
        if (prediction.Steady.Exists)
        {
            var band = plot.Add.Rectangle(0, until, prediction.Band.LowAmps, prediction.Band.HighAmps);
            (band.FillColor, band.LineWidth) = (BandFill.WithAlpha(0.9), 0);
            band.LegendText = "settled meter, 95 %";
        }

        Line(plot, [.. readings.Where(point => point.Seconds <= until)], Blue, 2.6f, string.Create(CultureInfo.InvariantCulture, $"the meter's readings ({meter.WindowSeconds:0.###} s window)"));

        // The first half cycles would press all else flat: what rises above is written instead.
        var interesting = Math.Max(readings.Count > 0 ? readings.Max(reading => reading.Amps) : 0, prediction.Steady.Exists ? prediction.Steady.LineAmps * 1.6 : 0);
        var top = Math.Min(prediction.Inrush.PeakAmps * 1.1, interesting * 2.2);
        plot.Axes.SetLimits(0, until, -top * 0.55, top);
        if (prediction.Inrush.PeakAmps > top)
        {
            Note(plot, until * 0.03, top * 0.97, $"first peak {PredictionPicture.Amps(prediction.Inrush.PeakAmps)}, too short for any meter", Alignment.UpperLeft, Amber);
        }

        plot.ShowLegend(Alignment.LowerRight);
        return plot;
    }

    /// <summary>Filament temperatures: who lights up first.</summary>
    public Plot Lighting()
    {
        var plot = Fresh("Lamps lighting up: healthy strong, unit shorted pale", "seconds after switching on", "kelvin");
        var lamps = bank.Lamps.Select((lamp, index) => (lamp, index)).Where(pair => pair.lamp.Filament is not null).Take(LampColours.Length).ToArray();
        foreach (var (lamp, index) in lamps)
        {
            Line(plot, Temperatures(healthy, index, prediction.Steady.Lamps[index].FilamentKelvin), LampColours[index], 2.5f, lamp.Name);
            Line(plot, Temperatures(shorted, index, prediction.Shorted.Lamps[index].FilamentKelvin), LampColours[index].WithAlpha(0.45), 1.8f, "");
        }

        var line = plot.Add.HorizontalLine(FirstGlowKelvin, 1, Red);
        line.EnableAutoscale = false;
        plot.Axes.SetLimits(Math.Log10(0.002), Math.Log10(LastSeconds), 250, 3000);
        Note(plot, Math.Log10(0.0021), FirstGlowKelvin, "first dull red", Alignment.LowerLeft, Red);
        plot.Axes.Bottom.TickGenerator = new ScottPlot.TickGenerators.NumericManual(
            [.. new[] { 0.002, 0.005, 0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1, 2, 5 }.Select(Math.Log10)],
            ["0.002", "0.005", "0.01", "0.02", "0.05", "0.1", "0.2", "0.5", "1", "2", "5"]);
        plot.ShowLegend(Alignment.UpperLeft);
        return plot;
    }

    private List<(double Seconds, double Amps)> MeterViewReadings()
    {
        // Drawn as steps: a reading stands for its whole window.
        var points = new List<(double, double)>();
        foreach (var (seconds, amps) in healthy.Readings(meter))
        {
            points.Add((seconds - meter.WindowSeconds, amps));
            points.Add((seconds, amps));
        }

        return points;
    }

    // Beyond what was simulated all is settled, or nearly.
    private static (double, double)[] Temperatures(SwitchOn run, int lamp, double settledKelvin) =>
        [.. run.Kelvin(lamp).Select((kelvin, index) => (Math.Log10(Math.Max(index * run.KelvinSeconds, 1e-4)), kelvin))
            .Append((Math.Log10(LastSeconds), double.IsNaN(settledKelvin) ? run.Kelvin(lamp)[^1] : settledKelvin))];

    private static Plot Fresh(string title, string bottom, string left)
    {
        var plot = new Plot();
        plot.Font.Set(ReportFonts.Family);
        plot.FigureBackground.Color = Colors.White;
        plot.RenderManager.ClearCanvasBeforeEachRender = false;
        plot.Grid.MajorLineColor = Color.FromHex("#e6e6e6");
        plot.Title(title, 19);
        plot.XLabel(bottom, 15);
        plot.YLabel(left, 15);
        plot.Axes.Bottom.TickLabelStyle.FontSize = 14;
        plot.Axes.Left.TickLabelStyle.FontSize = 14;
        plot.Axes.Title.Label.ForeColor = Ink;
        plot.Legend.FontSize = 14;
        plot.Legend.FontName = ReportFonts.Family;
        plot.Legend.BackgroundColor = Colors.White.WithAlpha(0.85);
        plot.Legend.OutlineColor = Color.FromHex("#d0d0d0");
        plot.Legend.ShadowColor = Colors.Transparent;
        return plot;
    }

    private static void Line(Plot plot, IReadOnlyList<(double X, double Y)> points, Color colour, float width, string legend)
    {
        if (points.Count == 0)
        {
            return;
        }

        var line = plot.Add.ScatterLine(points.Select(point => point.X).ToArray(), points.Select(point => point.Y).ToArray(), colour);
        (line.LineWidth, line.LegendText) = (width, legend);
    }

    private static void Dot(Plot plot, double x, double y, Color colour, string text, Alignment alignment, float right, float down)
    {
        plot.Add.Marker(x, y, MarkerShape.FilledCircle, 13, colour);
        var label = Note(plot, x, y, text, alignment, colour);
        (label.OffsetX, label.OffsetY) = (right, down);
    }

    private static ScottPlot.Plottables.Text Note(Plot plot, double x, double y, string text, Alignment alignment, Color colour)
    {
        var label = plot.Add.Text(text, x, y);
        (label.LabelAlignment, label.LabelFontColor, label.LabelFontSize, label.LabelFontName, label.LabelBold) = (alignment, colour, 16, ReportFonts.Family, true);
        label.LabelBackgroundColor = Colors.White.WithAlpha(0.75);
        return label;
    }
}
