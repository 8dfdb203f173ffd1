using System.IO.Compression;
using System.Text;
using System.Text.Json;
using Lampwarden.Host.Commands;

namespace Lampwarden.Host.Recording.Exchange;

/// <summary>A run that has come from a file.</summary>
/// <param name="Record">Null where the file holds readings alone.</param>
/// <param name="Attachments">Bytes by name.</param>
public sealed record CarriedRun(RunRecord? Record, IEnumerable<LineReading> Readings, IReadOnlyDictionary<string, byte[]> Attachments);

/// <summary>A whole run in one zip: run.json, readings.csv and attachments/. Nothing of the run is left out.</summary>
public static class RunArchive
{
    private const string RunEntry = "run.json";
    private const string ReadingsEntry = "readings.csv";
    private const string AttachmentsFolder = "attachments/";

    /// <summary>The run without readings, as archives and Parquet files carry it.</summary>
    public static string ToJson(RunRecord record) => JsonSerializer.Serialize(record, Json.Pretty);

    /// <summary>Reads what <see cref="ToJson"/> wrote.</summary>
    /// <exception cref="SeriesFormatException">It is not a run.</exception>
    public static RunRecord FromJson(string json, string name)
    {
        try
        {
            return JsonSerializer.Deserialize<RunRecord>(json, Json.Compact) ?? throw new JsonException("it is empty");
        }
        catch (JsonException fault)
        {
            throw new SeriesFormatException($"{name} carries no readable run: {fault.Message} Expected what 'lampwarden export' of this or an earlier version wrote.");
        }
    }

    /// <summary>Writes a run with everything.</summary>
    public static void Write(Stream stream, SoakStore store, string run)
    {
        using var zip = new ZipArchive(stream, ZipArchiveMode.Create, leaveOpen: true);
        var record = store.Run(run);
        using (var writer = new StreamWriter(zip.CreateEntry(RunEntry).Open()))
        {
            writer.Write(ToJson(record));
        }

        using (var writer = new StreamWriter(zip.CreateEntry(ReadingsEntry).Open()))
        {
            CsvSeries.Write(writer, store.Readings(run), store.HasVolts(run));
        }

        foreach (var attachment in record.Attachments)
        {
            using var entry = zip.CreateEntry(AttachmentsFolder + attachment.Name, CompressionLevel.NoCompression).Open();
            entry.Write(store.Attachment(run, attachment.Name));
        }
    }

    /// <summary>Reads an archive.</summary>
    /// <exception cref="SeriesFormatException">It is not one.</exception>
    public static CarriedRun Read(Stream stream, string name)
    {
        try
        {
            using var zip = new ZipArchive(stream, ZipArchiveMode.Read, leaveOpen: true);
            var record = FromJson(Encoding.UTF8.GetString(Bytes(zip, RunEntry, name)), name);
            using var text = new StreamReader(new MemoryStream(Bytes(zip, ReadingsEntry, name)));
            var readings = CsvSeries.Read(text, $"{name}, {ReadingsEntry}").ToList();
            return new CarriedRun(record, readings, record.Attachments.ToDictionary(
                attachment => attachment.Name, attachment => Bytes(zip, AttachmentsFolder + attachment.Name, name)));
        }
        catch (InvalidDataException fault)
        {
            throw new SeriesFormatException($"{name} is no zip archive: {fault.Message}");
        }
    }

    private static byte[] Bytes(ZipArchive zip, string entry, string name)
    {
        using var from = (zip.GetEntry(entry) ?? throw new SeriesFormatException($"{name} has no '{entry}'; expected an archive that 'lampwarden export --format archive' wrote.")).Open();
        using var to = new MemoryStream();
        from.CopyTo(to);
        return to.ToArray();
    }
}
