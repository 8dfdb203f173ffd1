using System.Reflection;

namespace Lampwarden.Host;

/// <summary>Who we are, for records and reports.</summary>
public static class Product
{
    /// <summary>The version, such as 0.1.0.</summary>
    public static string Version { get; } =
        typeof(Product).Assembly.GetCustomAttribute<AssemblyInformationalVersionAttribute>()?.InformationalVersion ?? "0";

    /// <summary>Name and version, such as Lampwarden 0.1.0.</summary>
    public static string NameAndVersion => $"Lampwarden {Version}";
}
