using System.Text.Json;
using System.Text.Json.Serialization;
using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Commands;

/// <summary>How every JSON document of the product is written: camelCase, enums by their contract names, null for a number that cannot be given.</summary>
public static class Json
{
    /// <summary>For documents on standard output and over HTTP.</summary>
    public static readonly JsonSerializerOptions Pretty = Make(indented: true);

    /// <summary>For what is stored: one line.</summary>
    public static readonly JsonSerializerOptions Compact = Make(indented: false);

    private static JsonSerializerOptions Make(bool indented)
    {
        var options = new JsonSerializerOptions(JsonSerializerDefaults.Web)
        {
            WriteIndented = indented,
            Encoder = System.Text.Encodings.Web.JavaScriptEncoder.UnsafeRelaxedJsonEscaping,
            // Web defaults would also read numbers from strings; a record says what it says.
            NumberHandling = JsonNumberHandling.Strict,
        };
        options.Converters.Add(new FiniteNumberConverter());
        options.Converters.Add(new TextEnumConverter<Signature>(WatchingNames.Text));
        options.Converters.Add(new TextEnumConverter<Severity>(WatchingNames.Text));
        options.Converters.Add(new TextEnumConverter<Verdict>(WatchingNames.Text));
        options.Converters.Add(new JsonStringEnumConverter(JsonNamingPolicy.KebabCaseLower));
        options.MakeReadOnly(populateMissingResolver: true);
        return options;
    }

    /// <summary>NaN and infinities are null in JSON, and come back as NaN.</summary>
    private sealed class FiniteNumberConverter : JsonConverter<double>
    {
        public override bool HandleNull => true;

        public override double Read(ref Utf8JsonReader reader, Type typeToConvert, JsonSerializerOptions options) =>
            reader.TokenType == JsonTokenType.Null ? double.NaN : reader.GetDouble();

        public override void Write(Utf8JsonWriter writer, double value, JsonSerializerOptions options)
        {
            if (double.IsFinite(value))
            {
                writer.WriteNumberValue(value);
            }
            else
            {
                writer.WriteNullValue();
            }
        }
    }

    private sealed class TextEnumConverter<T>(Func<T, string> text) : JsonConverter<T>
        where T : struct, Enum
    {
        private readonly Dictionary<string, T> _byText = Enum.GetValues<T>().ToDictionary(text);

        public override T Read(ref Utf8JsonReader reader, Type typeToConvert, JsonSerializerOptions options)
        {
            var name = reader.GetString() ?? "";
            return _byText.TryGetValue(name, out var value)
                ? value
                : throw new JsonException($"'{name}' is none of {string.Join(", ", _byText.Keys)}.");
        }

        public override void Write(Utf8JsonWriter writer, T value, JsonSerializerOptions options) =>
            writer.WriteStringValue(text(value));
    }
}
