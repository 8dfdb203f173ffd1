using System.ComponentModel.DataAnnotations;
using System.Reflection;
using System.Text.Json;
using System.Text.Json.Nodes;
using System.Text.Json.Schema;
using System.Text.Json.Serialization;
using System.Text.Json.Serialization.Metadata;

namespace Lampwarden.Host.Configuration;

/// <summary>The JSON schema of the configuration, made from the options themselves so that it cannot fall behind them.</summary>
public static class ConfigurationSchema
{
    private static readonly JsonSerializerOptions Naming = new()
    {
        PropertyNamingPolicy = JsonNamingPolicy.CamelCase,
        Converters = { new JsonStringEnumConverter(JsonNamingPolicy.CamelCase) },
        TypeInfoResolver = new DefaultJsonTypeInfoResolver(),
        UnmappedMemberHandling = JsonUnmappedMemberHandling.Disallow,
        WriteIndented = true,
        NewLine = "\n",
        Encoder = System.Text.Encodings.Web.JavaScriptEncoder.UnsafeRelaxedJsonEscaping,
    };

    /// <summary>The schema as text, ending with a line end.</summary>
    public static string Text()
    {
        var exporting = new JsonSchemaExporterOptions { TreatNullObliviousAsNonNullable = true, TransformSchemaNode = AddRules };
        var root = Naming.GetJsonSchemaAsNode(typeof(LampwardenOptions), exporting).AsObject();
        // Editors want the key that names this very schema to be allowed.
        root["properties"]!.AsObject().Insert(0, "$schema", new JsonObject { ["type"] = "string" });
        var schema = new JsonObject { ["$schema"] = "https://json-schema.org/draft/2020-12/schema", ["title"] = "Lampwarden configuration" };
        foreach (var (key, value) in root.ToList())
        {
            schema[key] = value?.DeepClone();
        }

        return schema.ToJsonString(Naming) + "\n";
    }

    private static JsonNode AddRules(JsonSchemaExporterContext context, JsonNode node)
    {
        if (context.TypeInfo.Type == typeof(BenchOptions) && node["properties"] is JsonObject keys)
        {
            keys.Remove("inventory");
        }

        if (node is not JsonObject schema || context.PropertyInfo?.AttributeProvider is not { } attributes)
        {
            return node;
        }

        foreach (var rule in attributes.GetCustomAttributes(typeof(ValidationAttribute), inherit: true))
        {
            switch (rule)
            {
                case RangeAttribute range:
                    schema["minimum"] = JsonValue.Create(Convert.ToDouble(range.Minimum, System.Globalization.CultureInfo.InvariantCulture));
                    schema["maximum"] = JsonValue.Create(Convert.ToDouble(range.Maximum, System.Globalization.CultureInfo.InvariantCulture));
                    break;
                case AllowedValuesAttribute allowed:
                    schema["enum"] = new JsonArray([.. allowed.Values.Select(value => value is null ? null : JsonSerializer.SerializeToNode(value))]);
                    break;
                case RegularExpressionAttribute pattern:
                    schema["pattern"] = pattern.Pattern;
                    break;
            }
        }

        return schema;
    }
}
