using System.Globalization;

namespace Lampwarden.Host.Recording.Exchange;

/// <summary>A CSV that is not a series of readings; the message names line, column, value and what is expected.</summary>
public sealed class SeriesFormatException(string message) : FormatException(message);

/// <summary>
/// A run's stream as text: header <c>seconds,amps</c> and, where mains is measured, <c>,volts</c>. Numbers have the digits
/// the meter sent. A blank or <c>nan</c> cell is a missed poll, <c>inf</c> an overload. The line end is LF, so that the
/// check sum of a report is the check sum of this text on every system.
/// </summary>
public static class CsvSeries
{
    private const int LongestLine = 1024;

    /// <summary>Writes a stream.</summary>
    public static void Write(TextWriter writer, IEnumerable<LineReading> readings, bool hasVolts)
    {
        writer.Write(hasVolts ? "seconds,amps,volts\n" : "seconds,amps\n");
        // Standard output flushes at every write: a block of lines at a time, or two million lines take minutes.
        Span<char> block = new char[1 << 15];
        var filled = 0;
        foreach (var reading in readings)
        {
            if (block.Length - filled < LongestLine)
            {
                writer.Write(block[..filled]);
                filled = 0;
            }

            var line = block[filled..];
            var length = 0;
            Put(line, ref length, reading.Seconds, 3);
            line[length++] = ',';
            Put(line, ref length, reading.Amps, reading.Decimals);
            if (hasVolts)
            {
                line[length++] = ',';
                Put(line, ref length, reading.MainsVolts, reading.VoltsDecimals);
            }

            line[length++] = '\n';
            filled += length;
        }

        writer.Write(block[..filled]);
    }

    /// <summary>Reads a stream, line by line.</summary>
    /// <param name="name">Named in messages.</param>
    /// <exception cref="SeriesFormatException">A line is broken; what came before it has been given already.</exception>
    public static IEnumerable<LineReading> Read(TextReader text, string name)
    {
        var hasVolts = text.ReadLine()?.Trim('\uFEFF').Trim().ToLowerInvariant() switch
        {
            "seconds,amps" => false,
            "seconds,amps,volts" => true,
            var other => throw new SeriesFormatException(
                $"{name}, line 1: the header is '{other}'; expected 'seconds,amps' or 'seconds,amps,volts', all in SI units."),
        };
        var number = 1;
        var last = double.NegativeInfinity;
        while (text.ReadLine() is { } line)
        {
            number++;
            if (line.Length == 0)
            {
                continue;
            }

            var cells = line.Split(',');
            if (cells.Length != (hasVolts ? 3 : 2))
            {
                throw new SeriesFormatException($"{name}, line {number}: '{line}' has {cells.Length} cells; expected {(hasVolts ? 3 : 2)}, as in the header.");
            }

            var reading = new LineReading(
                Number(cells[0], name, number, "seconds").Value,
                Number(cells[1], name, number, "amps").Value, Number(cells[1], name, number, "amps").Decimals,
                hasVolts ? Number(cells[2], name, number, "volts").Value : double.NaN, hasVolts ? Number(cells[2], name, number, "volts").Decimals : 0);
            if (!double.IsFinite(reading.Seconds) || reading.Seconds < Math.Max(0, last))
            {
                throw new SeriesFormatException($"{name}, line {number}: the time '{cells[0]}' does not follow {last.ToString(CultureInfo.InvariantCulture)} s; expected seconds since the run began, never going back.");
            }

            last = reading.Seconds;
            yield return reading;
        }
    }

    private static void Put(Span<char> line, ref int length, double value, int decimals)
    {
        if (double.IsNaN(value))
        {
            return;
        }

        ReadOnlySpan<char> format = decimals switch
        {
            < 0 => "R",
            < 10 => ['F', (char)('0' + decimals)],
            _ => ['F', '1', (char)('0' + decimals - 10)],
        };
        if (!double.IsFinite(value))
        {
            (value > 0 ? "inf" : "-inf").CopyTo(line[length..]);
            length += value > 0 ? 3 : 4;
            return;
        }

        value.TryFormat(line[length..], out var written, format, CultureInfo.InvariantCulture);
        length += written;
    }

    private static (double Value, int Decimals) Number(string cell, string name, int line, string column)
    {
        var text = cell.Trim();
        if (text.Length == 0 || text.Equals("nan", StringComparison.OrdinalIgnoreCase))
        {
            return (double.NaN, 0);
        }

        if (text.Equals("inf", StringComparison.OrdinalIgnoreCase))
        {
            return (double.PositiveInfinity, 0);
        }

        if (!double.TryParse(text, NumberStyles.Float, CultureInfo.InvariantCulture, out var value) || !double.IsFinite(value))
        {
            throw new SeriesFormatException(
                $"{name}, line {line}: '{cell}' is no number of {column}; expected such as 0.4123, blank for a missed reading, inf for an overload.");
        }

        var point = text.IndexOf('.', StringComparison.Ordinal);
        return (value, text.Contains('e', StringComparison.OrdinalIgnoreCase) ? -1 : point < 0 ? 0 : text.Length - point - 1);
    }
}
