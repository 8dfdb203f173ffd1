using System.ComponentModel.DataAnnotations;
using System.Globalization;
using System.Text.Json;
using System.Text.Json.Serialization;

namespace Lampwarden.Simulator.Benches;

/// <summary>Reads a scenario and refuses one with faults, naming all of them.</summary>
public static class ScenarioFile
{
    private static readonly JsonSerializerOptions Reading = new(JsonSerializerDefaults.Web)
    {
        ReadCommentHandling = JsonCommentHandling.Skip,
        AllowTrailingCommas = true,
        UnmappedMemberHandling = JsonUnmappedMemberHandling.Disallow,
        NumberHandling = JsonNumberHandling.Strict,
        Converters = { new JsonStringEnumConverter(JsonNamingPolicy.KebabCaseLower, allowIntegerValues: false) },
    };

    /// <summary>Reads a scenario file.</summary>
    /// <param name="path">A file, JSON with comments.</param>
    /// <exception cref="FormatException">Missing, not JSON, or a value against its rule; the message names the file, the key and the rule.</exception>
    public static Scenario Load(string path)
    {
        if (!File.Exists(path))
        {
            throw new FormatException($"{path}: no such scenario file; those of the project lie in config/scenarios.");
        }

        Scenario scenario;
        try
        {
            scenario = JsonSerializer.Deserialize<Scenario>(File.ReadAllText(path), Reading) ?? new Scenario();
        }
        catch (JsonException error)
        {
            throw new FormatException($"{path}: {error.Message}");
        }

        var faults = new List<string>();
        Validate(scenario, "", faults);
        Validate(scenario.Truth, "truth.", faults);
        Validate(scenario.Meter, "meter.", faults);
        Validate(scenario.Expect, "expect.", faults);
        for (var index = 0; index < scenario.Meter.Troubles.Count; index++)
        {
            Validate(scenario.Meter.Troubles[index], string.Create(CultureInfo.InvariantCulture, $"meter.troubles[{index}]."), faults);
        }

        for (var index = 0; index < scenario.Faults.Count; index++)
        {
            Validate(scenario.Faults[index], string.Create(CultureInfo.InvariantCulture, $"faults[{index}]."), faults);
        }

        return faults.Count == 0
            ? scenario
            : throw new FormatException($"{path}: {faults.Count} fault(s)\n" + string.Join('\n', faults.Select(fault => "  " + fault)));
    }

    private static void Validate(object part, string prefix, List<string> faults)
    {
        var results = new List<ValidationResult>();
        Validator.TryValidateObject(part, new ValidationContext(part), results, validateAllProperties: true);
        faults.AddRange(results.Select(result =>
            prefix + JsonNamingPolicy.CamelCase.ConvertName(result.MemberNames.FirstOrDefault() ?? "") + ": " + result.ErrorMessage));
    }
}
