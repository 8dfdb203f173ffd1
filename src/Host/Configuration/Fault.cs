namespace Lampwarden.Host.Configuration;

/// <summary>One thing wrong with the configuration.</summary>
/// <param name="Key">The key's path as the file has it, such as <c>benches[0].meters[1].baudRate</c>.</param>
/// <param name="Value">The value given; null where none was.</param>
/// <param name="Rule">What is expected, and what to do.</param>
public sealed record Fault(string Key, string? Value, string Rule)
{
    /// <summary>One line: key, value, rule.</summary>
    public override string ToString() => Value is null ? $"{Key}: {Rule}" : $"{Key} is '{Value}': {Rule}";
}

/// <summary>The configuration cannot be used; carries every fault found, not only the first.</summary>
public sealed class ConfigurationException : Exception
{
    /// <summary>All the faults of one source.</summary>
    /// <param name="source">The file (or the command line) that they stand in.</param>
    /// <param name="faults">At least one.</param>
    public ConfigurationException(string source, IReadOnlyList<Fault> faults)
        : base($"{source}: {(faults.Count == 1 ? "1 fault" : $"{faults.Count} faults")}\n" +
               string.Join('\n', faults.Select(fault => "  " + fault)))
    {
        Faults = faults;
    }

    /// <summary>What is wrong, in the order of the file's keys.</summary>
    public IReadOnlyList<Fault> Faults { get; }
}
