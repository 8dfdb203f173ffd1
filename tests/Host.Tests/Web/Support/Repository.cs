namespace Lampwarden.Host.Tests.Web;

/// <summary>Finds the repository a test runs in.</summary>
internal static class Repository
{
    public static string Root()
    {
        var folder = new DirectoryInfo(AppContext.BaseDirectory);
        while (!File.Exists(Path.Combine(folder.FullName, "Lampwarden.slnx")))
        {
            folder = folder.Parent ?? throw new InvalidOperationException("The tests must run inside the repository.");
        }

        return folder.FullName;
    }
}
