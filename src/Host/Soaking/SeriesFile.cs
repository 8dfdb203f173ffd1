using System.Globalization;
using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Soaking;

/// <summary>
/// The series that <c>export</c> writes and <c>replay</c> reads: header <c>seconds,amps</c> and optionally
/// <c>volts</c> (mains), SI, decimal point; a blank or <c>nan</c> cell is a gap, <c>inf</c> is meter overload.
/// </summary>
public static class SeriesFile
{
    /// <summary>Reads a series whole.</summary>
    /// <exception cref="FormatException">The file is missing, or a line is wrong; the message names file, line and what was expected.</exception>
    public static IReadOnlyList<Observation> Read(string path)
    {
        if (!File.Exists(path))
        {
            throw new FormatException($"{path}: no such file.");
        }

        using var reader = new StreamReader(path);
        var header = reader.ReadLine()?.Trim().TrimStart('\uFEFF').ToLowerInvariant();
        if (header is not ("seconds,amps" or "seconds,amps,volts"))
        {
            throw Fault(path, 1, header ?? "", "the header seconds,amps or seconds,amps,volts");
        }

        var columns = header.Count(letter => letter == ',') + 1;
        var series = new List<Observation>();
        var number = 1;
        while (reader.ReadLine() is { } line)
        {
            number++;
            if (line.Length == 0)
            {
                continue;
            }

            var cells = line.Split(',');
            if (cells.Length != columns)
            {
                throw Fault(path, number, line, $"{columns} cells");
            }

            var seconds = Cell(cells[0], path, number, line, "seconds");
            if (!double.IsFinite(seconds) || seconds < 0 || (series.Count > 0 && seconds < series[^1].Seconds))
            {
                throw Fault(path, number, line, "seconds of 0 or more that never decrease");
            }

            var amps = Cell(cells[1], path, number, line, "amps");
            var volts = columns == 3 ? Cell(cells[2], path, number, line, "volts") : double.NaN;
            if (amps < 0 || volts < 0 || double.IsInfinity(volts))
            {
                throw Fault(path, number, line, "amps and volts of 0 or more");
            }

            series.Add(new Observation(seconds, amps, volts));
        }

        return series.Count > 0 ? series : throw Fault(path, number, "", "at least one line of readings");
    }

    /// <summary>Readings a second, from the middle spacing of the series; within what a watch accepts.</summary>
    public static double RatePerSecond(IReadOnlyList<Observation> series)
    {
        var steps = new List<double>();
        for (var index = 1; index < Math.Min(series.Count, 10_000); index++)
        {
            var step = series[index].Seconds - series[index - 1].Seconds;
            if (step > 0)
            {
                steps.Add(step);
            }
        }

        steps.Sort();
        return steps.Count == 0 ? 1 : Math.Clamp(1 / steps[steps.Count / 2], 0.2, 100);
    }

    private static double Cell(string text, string path, int number, string line, string column)
    {
        var trimmed = text.Trim();
        if (trimmed.Length == 0 || trimmed.Equals("nan", StringComparison.OrdinalIgnoreCase))
        {
            return double.NaN;
        }

        if (trimmed.Equals("inf", StringComparison.OrdinalIgnoreCase))
        {
            return double.PositiveInfinity;
        }

        return double.TryParse(trimmed, NumberStyles.Float, CultureInfo.InvariantCulture, out var value) && double.IsFinite(value)
            ? value
            : throw Fault(path, number, line, $"a number with a decimal point in column {column}, a blank or nan for a gap, inf for overload; found '{trimmed}'");
    }

    private static FormatException Fault(string path, int number, string line, string expected) =>
        new(string.Create(CultureInfo.InvariantCulture, $"{path}, line {number}: expected {expected}.\n  {(line.Length > 120 ? line[..120] + "…" : line)}\nNothing was replayed; mend the line and try again."));
}
