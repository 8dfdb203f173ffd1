using System.Text.Json;
using System.Text.Json.Serialization;

namespace Lampwarden.Acquisition.Tests.Support;

/// <summary>The meters of the example configurations in config/meters.</summary>
internal static class Examples
{
    private static readonly JsonSerializerOptions Reading = new(JsonSerializerDefaults.Web)
    {
        ReadCommentHandling = JsonCommentHandling.Skip,
        UnmappedMemberHandling = JsonUnmappedMemberHandling.Disallow,
        Converters = { new JsonStringEnumConverter(JsonNamingPolicy.CamelCase) },
    };

    public static MeterOptions Meter(string name)
    {
        using var file = JsonDocument.Parse(File.ReadAllText(Path.Combine(Root(), "config", "meters", name + ".json")), new JsonDocumentOptions { CommentHandling = JsonCommentHandling.Skip });
        var meter = file.RootElement.GetProperty("benches")[0].GetProperty("meters")[0];
        return meter.Deserialize<MeterOptions>(Reading)!;
    }

    private static string Root()
    {
        var folder = AppContext.BaseDirectory;
        while (!File.Exists(Path.Combine(folder, "Lampwarden.slnx")))
        {
            folder = Path.GetDirectoryName(folder) ?? throw new DirectoryNotFoundException("the tests run outside the project");
        }

        return folder;
    }
}
