using Lampwarden.Host.Recording;
using ScottPlot;
using SkiaSharp;

namespace Lampwarden.Host.Reporting.Pictures;

/// <summary>What a trace is drawn with besides the readings. NaN: not drawn.</summary>
/// <param name="PredictedAmps">The predicted steady current.</param>
/// <param name="Marks">Findings: seconds and the number that the table of findings gives them.</param>
public sealed record TraceMarks(double BandLowAmps, double BandHighAmps, double PredictedAmps, IReadOnlyList<(double Seconds, string Label)> Marks);

/// <summary>
/// Line current against time: the extent of every bucket as a grey body and its mean as a black line. Told apart by
/// lightness and dashes alone, so that a black and white print loses nothing.
/// </summary>
public sealed class TracePicture(RunWindow window, TraceMarks marks) : IPicture
{
    private static readonly Color Ink = Color.FromHex("#111111");
    private static readonly Color Body = Color.FromHex("#9a9a9a");
    private static readonly Color BandFill = Color.FromHex("#e9efe9");
    private static readonly Color BandEdge = Color.FromHex("#5c6f5c");
    private const int LabelRows = 3;
    private const double LabelWidthShare = 0.032;
    private const double LabelRowShare = 0.115;

    private static readonly Color GapFill = Color.FromHex("#d9d9d9");

    /// <inheritdoc/>
    public void Draw(SKCanvas canvas, float width, float height)
    {
        ReportFonts.Register();
        using var plot = new Plot();
        var (unit, scale) = TimeUnit(window.ToSeconds - window.FromSeconds);
        plot.ScaleFactor = 0.75; // ScottPlot thinks in pixels of 1/96 inch; the page is in points of 1/72.
        plot.FigureBackground.Color = Colors.White;
        plot.Axes.SetLimits(window.FromSeconds / scale, window.ToSeconds / scale, 0, Top());
        DrawBand(plot, scale);
        DrawGaps(plot, scale);
        DrawReadings(plot, scale);
        DrawMarks(plot, scale);
        Style(plot, unit);
        plot.Render(canvas, new PixelRect(0, width, height, 0));
    }

    internal static (string Unit, double Seconds) TimeUnit(double length) => length switch
    {
        > 5400 => ("hours", 3600),
        > 300 => ("minutes", 60),
        _ => ("seconds", 1),
    };

    private double Top()
    {
        // The inrush of the first minute would press a whole soak flat: it has a picture of its own.
        var length = window.ToSeconds - window.FromSeconds;
        var from = window.FromSeconds + (length > 600 ? Math.Max(60, window.BucketSeconds) : 0);
        var most = window.Buckets.Where(bucket => bucket.Count > 0 && bucket.FromSeconds >= from).Select(bucket => bucket.MaxAmps).DefaultIfEmpty(1).Max();
        return 1.12 * new[] { most, marks.BandHighAmps, marks.PredictedAmps }.Where(double.IsFinite).Max();
    }

    private void DrawBand(Plot plot, double scale)
    {
        if (double.IsFinite(marks.BandLowAmps) && double.IsFinite(marks.BandHighAmps))
        {
            var (from, to) = (window.FromSeconds / scale, window.ToSeconds / scale);
            var band = plot.Add.Rectangle(from, to, marks.BandLowAmps, marks.BandHighAmps);
            band.FillColor = BandFill;
            band.LineWidth = 0;
            foreach (var edge in new[] { marks.BandLowAmps, marks.BandHighAmps })
            {
                var line = plot.Add.HorizontalLine(edge, 1, BandEdge, LinePattern.Dashed);
                line.EnableAutoscale = false;
            }
        }

        if (double.IsFinite(marks.PredictedAmps))
        {
            plot.Add.HorizontalLine(marks.PredictedAmps, 1.2f, Ink, LinePattern.Dotted);
        }
    }

    private void DrawGaps(Plot plot, double scale)
    {
        foreach (var gap in window.Gaps)
        {
            var from = Math.Max(gap.FromSeconds, window.FromSeconds);
            var to = Math.Min(gap.ToSeconds, window.ToSeconds);
            var box = plot.Add.Rectangle(from / scale, to / scale, 0, Top());
            box.FillColor = GapFill;
            box.FillHatch = new ScottPlot.Hatches.Striped(ScottPlot.Hatches.StripeDirection.DiagonalUp);
            box.FillHatchColor = Body;
            box.LineWidth = 0;
        }
    }

    private void DrawReadings(Plot plot, double scale)
    {
        foreach (var stretch in Stretches())
        {
            var (xs, least, most, mean) = (
                stretch.ConvertAll(bucket => (bucket.FromSeconds + bucket.ToSeconds) / 2 / scale),
                stretch.ConvertAll(bucket => bucket.MinAmps), stretch.ConvertAll(bucket => bucket.MaxAmps), stretch.ConvertAll(bucket => bucket.MeanAmps));
            var body = plot.Add.FillY(xs.ToArray(), least.ToArray(), most.ToArray());
            body.FillColor = Body;
            body.LineColor = Body;
            body.LineWidth = 0.5f;
            body.MarkerStyle.IsVisible = false;
            var line = plot.Add.ScatterLine(xs, mean, Ink);
            line.LineWidth = 1;
        }
    }

    // Buckets without readings break the line: nothing is drawn across a time nobody looked.
    private IEnumerable<List<Bucket>> Stretches()
    {
        var stretch = new List<Bucket>();
        foreach (var bucket in window.Buckets)
        {
            if (bucket.Count > 0)
            {
                stretch.Add(bucket);
                continue;
            }

            if (stretch.Count > 0 && IsGap(bucket))
            {
                yield return stretch;
                stretch = [];
            }
        }

        if (stretch.Count > 0)
        {
            yield return stretch;
        }
    }

    // A bucket narrower than the time between two readings is empty without anything being amiss.
    private bool IsGap(Bucket bucket) =>
        window.Gaps.Any(gap => gap.FromSeconds < bucket.ToSeconds && gap.ToSeconds > bucket.FromSeconds);

    private void DrawMarks(Plot plot, double scale)
    {
        // Labels that would cover each other go one row down, and after the last row stay away: the line is there, and the table.
        var rowsTaken = Enumerable.Repeat(double.NegativeInfinity, LabelRows).ToArray();
        var room = (window.ToSeconds - window.FromSeconds) * LabelWidthShare;
        foreach (var (seconds, label) in marks.Marks.OrderBy(mark => mark.Seconds))
        {
            if (seconds < window.FromSeconds || seconds > window.ToSeconds)
            {
                continue;
            }

            plot.Add.VerticalLine(seconds / scale, 1.4f, Ink, LinePattern.DenselyDashed);
            var row = Array.FindIndex(rowsTaken, taken => seconds - taken >= room);
            if (row < 0)
            {
                continue;
            }

            rowsTaken[row] = seconds;
            var text = plot.Add.Text(label, seconds / scale, Top() * (0.985 - (row * LabelRowShare)));
            text.LabelFontName = ReportFonts.Family;
            text.LabelFontSize = 13;
            text.LabelBold = true;
            text.LabelFontColor = Colors.White;
            text.LabelBackgroundColor = Ink;
            text.LabelPadding = 4;
            text.LabelAlignment = Alignment.UpperCenter;
        }
    }

    private static void Style(Plot plot, string unit)
    {
        plot.Grid.MajorLineColor = Color.FromHex("#d5d5d5");
        plot.Grid.MajorLineWidth = 0.6f;
        plot.Axes.Bottom.Label.Text = $"{unit} since switch-on";
        plot.Axes.Left.Label.Text = "line current, A RMS";
        foreach (var axis in new IAxis[] { plot.Axes.Bottom, plot.Axes.Left })
        {
            axis.Label.FontName = ReportFonts.Family;
            axis.Label.FontSize = 12;
            axis.Label.Bold = false;
            axis.TickLabelStyle.FontName = ReportFonts.Family;
            axis.TickLabelStyle.FontSize = 11;
        }

        plot.Axes.Right.FrameLineStyle.Width = 0;
        plot.Axes.Top.FrameLineStyle.Width = 0;
    }
}
