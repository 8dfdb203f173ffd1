using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Alerting.Routes;

/// <summary>A secret from a file or the environment. Its text is never shown: <see cref="ToString"/> says only where it came from.</summary>
public sealed class Secret
{
    private readonly string _source;

    private Secret(string value, string source) => (Value, _source) = (value, source);

    /// <summary>The secret itself; for the wire only.</summary>
    public string Value { get; }

    /// <summary>Reads a secret.</summary>
    /// <param name="file">File that holds it, alone; line ends around it are dropped.</param>
    /// <param name="variable">Environment variable, where no file is named.</param>
    /// <param name="key">The configuration key, for the message.</param>
    /// <returns>Null where neither is named.</returns>
    /// <exception cref="ConfigurationException">Named but not there, unreadable or empty.</exception>
    public static Secret? Read(string? file, string? variable, string key)
    {
        if (file is null && variable is null)
        {
            return null;
        }

        string? value;
        try
        {
            value = file is not null ? File.ReadAllText(file).Trim('\r', '\n', ' ') : Environment.GetEnvironmentVariable(variable!);
        }
        catch (Exception error) when (error is IOException or UnauthorizedAccessException)
        {
            throw new ConfigurationException("secrets", [new Fault(key, file, $"cannot be read: {error.Message}")]);
        }

        return !string.IsNullOrEmpty(value)
            ? new Secret(value, file ?? variable!)
            : throw new ConfigurationException("secrets", [new Fault(key, file ?? variable, "is empty or not there; put the secret into the file or the environment variable")]);
    }

    /// <inheritdoc/>
    public override string ToString() => $"(secret from {_source})";
}
