using System.Globalization;
using System.Text.Json;
using Microsoft.Extensions.Configuration;

namespace Lampwarden.Host.Configuration;

/// <summary>Reads the configuration: one JSON file (comments allowed), environment variables over it.</summary>
public static class ConfigurationFile
{
    /// <summary>Where the configuration lies unless <c>--config</c> says otherwise.</summary>
    public const string DefaultPath = "config/bench.json";

    /// <summary>Environment variables with this prefix override keys: <c>LAMPWARDEN__BENCHES__0__NAME</c>.</summary>
    public const string EnvironmentPrefix = "LAMPWARDEN__";

    /// <summary>Reads and checks the file.</summary>
    /// <param name="path">The JSON file.</param>
    /// <returns>Options that have passed every rule.</returns>
    /// <exception cref="ConfigurationException">The file is missing, is not JSON, or has faults: all are listed.</exception>
    public static LampwardenOptions Load(string path)
    {
        if (!File.Exists(path))
        {
            throw new ConfigurationException(path, [new Fault("file", null, "is not there; name one with --config, or copy config/bench.json from the project")]);
        }

        IConfigurationRoot root;
        try
        {
            root = new ConfigurationBuilder()
                .AddJsonFile(Path.GetFullPath(path), optional: false, reloadOnChange: false)
                .AddEnvironmentVariables(EnvironmentPrefix)
                .Build();
        }
        catch (Exception error) when (error is InvalidDataException or FormatException)
        {
            throw new ConfigurationException(path, [new Fault("file", null, NotJson(error.GetBaseException()))]);
        }

        var faults = new List<Fault>();
        var options = new LampwardenOptions();
        new StrictBinder(faults).Bind(root, options, "");
        OptionsRules.Check(options, faults);
        foreach (var bench in options.Benches)
        {
            bench.Inventory = [.. options.Lamps];
        }

        AlertsCheck.Run(options, faults);
        return faults.Count == 0 ? options : throw new ConfigurationException(path, faults);
    }

    private static string NotJson(Exception error)
    {
        // The reader counts lines and bytes from 0, and says so after its sentence; people count from 1.
        var sentence = error.Message.Split(" LineNumber:")[0];
        return error is JsonException { LineNumber: { } line, BytePositionInLine: { } column }
            ? string.Create(CultureInfo.InvariantCulture, $"is not JSON at line {line + 1}, column {column + 1}: {sentence}")
            : $"is not JSON: {sentence}";
    }
}
