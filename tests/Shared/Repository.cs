namespace Lampwarden.Tests;

/// <summary>The source tree that the tests were built from.</summary>
internal static class Repository
{
    /// <summary>Its root folder.</summary>
    public static string Root { get; } = Find();

    private static string Find()
    {
        var folder = new DirectoryInfo(AppContext.BaseDirectory);
        while (!File.Exists(Path.Combine(folder.FullName, "Lampwarden.slnx")))
        {
            folder = folder.Parent ?? throw new InvalidOperationException("The tests must run inside the repository.");
        }

        return folder.FullName;
    }
}
