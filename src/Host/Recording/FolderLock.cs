namespace Lampwarden.Host.Recording;

/// <summary>One recording program a folder: a file held open and unshared, which the system lets go of even after a kill.</summary>
internal sealed class FolderLock : IDisposable
{
    private readonly FileStream _file;

    private FolderLock(FileStream file) => _file = file;

    /// <exception cref="StoreException">Another program records into the folder, or it cannot be written.</exception>
    public static FolderLock Take(string folder)
    {
        var path = Path.Combine(folder, "recording.lock");
        try
        {
            Directory.CreateDirectory(folder);
            return new FolderLock(new FileStream(path, FileMode.OpenOrCreate, FileAccess.ReadWrite, FileShare.None));
        }
        catch (IOException) when (File.Exists(path) && CanWrite(folder))
        {
            throw new StoreException($"Another program is recording into {folder}. End it, or give another folder with --record.");
        }
        catch (Exception trouble) when (trouble is IOException or UnauthorizedAccessException)
        {
            throw new StoreException(
                $"The record folder {folder} cannot be written: {trouble.Message} Make it writable, or give another folder with --record.", trouble);
        }
    }

    public void Dispose() => _file.Dispose();

    private static bool CanWrite(string folder)
    {
        try
        {
            var probe = Path.Combine(folder, $".probe-{Environment.ProcessId}");
            File.WriteAllBytes(probe, []);
            File.Delete(probe);
            return true;
        }
        catch (Exception trouble) when (trouble is IOException or UnauthorizedAccessException)
        {
            return false;
        }
    }
}
