using Parquet;
using Parquet.Schema;

namespace Lampwarden.Host.Recording.Exchange;

/// <summary>
/// A run as one Parquet file: columns seconds, amps, ampsDecimals, overload, volts, voltsDecimals, and the rest of the run
/// as a JSON document under the key <c>lampwarden.run</c> of the file's metadata. Columns are listed in docs/record.md.
/// </summary>
public static class ParquetSeries
{
    private const string RunKey = "lampwarden.run";
    private const int RowGroup = 262_144;

    private static readonly DataField<double> Seconds = new("seconds");
    private static readonly DataField<double?> Amps = new("amps");
    private static readonly DataField<int> AmpsDecimals = new("ampsDecimals");
    private static readonly DataField<bool> Overload = new("overload");
    private static readonly DataField<double?> Volts = new("volts");
    private static readonly DataField<int> VoltsDecimals = new("voltsDecimals");

    /// <summary>Writes a run; the stream must be seekable.</summary>
    public static async Task WriteAsync(Stream stream, string runJson, IEnumerable<LineReading> readings, CancellationToken cancellationToken = default)
    {
        var schema = new ParquetSchema(Seconds, Amps, AmpsDecimals, Overload, Volts, VoltsDecimals);
        await using var writer = await ParquetWriter.CreateAsync(schema, stream, cancellationToken: cancellationToken);
        writer.CustomMetadata = new Dictionary<string, string> { [RunKey] = runJson };
        foreach (var rows in readings.Chunk(RowGroup))
        {
            using var group = writer.CreateRowGroup();
            await group.WriteAsync<double>(Seconds, Column(rows, row => row.Seconds), cancellationToken: cancellationToken);
            await group.WriteAsync<double>(Amps, Column(rows, row => Some(row.Amps)), cancellationToken: cancellationToken);
            await group.WriteAsync<int>(AmpsDecimals, Column(rows, row => row.Decimals), cancellationToken: cancellationToken);
            await group.WriteAsync<bool>(Overload, Column(rows, row => row.IsOverload), cancellationToken: cancellationToken);
            await group.WriteAsync<double>(Volts, Column(rows, row => Some(row.MainsVolts)), cancellationToken: cancellationToken);
            await group.WriteAsync<int>(VoltsDecimals, Column(rows, row => row.VoltsDecimals), cancellationToken: cancellationToken);
        }
    }

    /// <summary>Reads what <see cref="WriteAsync"/> wrote.</summary>
    /// <returns>The run's JSON document, null where another program wrote the file, and its stream.</returns>
    /// <exception cref="SeriesFormatException">The columns are not those of a run.</exception>
    public static async Task<(string? RunJson, IReadOnlyList<LineReading> Readings)> ReadAsync(Stream stream, string name, CancellationToken cancellationToken = default)
    {
        await using var reader = await ParquetReader.CreateAsync(stream, cancellationToken: cancellationToken);
        var missing = new DataField[] { Seconds, Amps, AmpsDecimals, Overload, Volts, VoltsDecimals }
            .Where(field => reader.Schema.DataFields.All(there => there.Name != field.Name)).Select(field => field.Name).ToList();
        if (missing.Count > 0)
        {
            throw new SeriesFormatException($"{name} lacks the columns {string.Join(", ", missing)}; expected a file that 'lampwarden export --format parquet' wrote.");
        }

        var readings = new List<LineReading>();
        for (var index = 0; index < reader.RowGroupCount; index++)
        {
            using var group = reader.OpenRowGroupReader(index);
            var count = (int)group.RowGroup.NumRows;
            var (seconds, decimals, overload, voltsDecimals) = (new double[count], new int[count], new bool[count], new int[count]);
            var (amps, volts) = (new double?[count], new double?[count]);
            await group.ReadAsync<double>(Seconds, seconds.AsMemory(), cancellationToken: cancellationToken);
            await group.ReadAsync<double>(Amps, amps.AsMemory(), cancellationToken: cancellationToken);
            await group.ReadAsync<int>(AmpsDecimals, decimals.AsMemory(), cancellationToken: cancellationToken);
            await group.ReadAsync<bool>(Overload, overload.AsMemory(), cancellationToken: cancellationToken);
            await group.ReadAsync<double>(Volts, volts.AsMemory(), cancellationToken: cancellationToken);
            await group.ReadAsync<int>(VoltsDecimals, voltsDecimals.AsMemory(), cancellationToken: cancellationToken);
            for (var row = 0; row < count; row++)
            {
                readings.Add(new LineReading(
                    seconds[row], overload[row] ? double.PositiveInfinity : amps[row] ?? double.NaN, decimals[row],
                    volts[row] ?? double.NaN, voltsDecimals[row]));
            }
        }

        return (reader.CustomMetadata.GetValueOrDefault(RunKey), readings);
    }

    private static ReadOnlyMemory<T> Column<T>(LineReading[] rows, Func<LineReading, T> value) => Array.ConvertAll(rows, row => value(row));

    // Foreign readers sum a column: an infinity would spoil the sum, and is told by the overload column instead.
    private static double? Some(double value) => double.IsFinite(value) ? value : null;
}
