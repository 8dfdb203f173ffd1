namespace Lampwarden.Host.Tests.Recording;

/// <summary>A folder of its own for one test, gone afterwards.</summary>
internal sealed class TempFolder : IDisposable
{
    public string Path { get; } = Directory.CreateTempSubdirectory("lampwarden-test-").FullName;

    public void Dispose() => Directory.Delete(Path, recursive: true);
}
