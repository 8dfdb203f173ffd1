using System.Runtime.InteropServices;
using Microsoft.Win32.SafeHandles;

namespace Lampwarden.Benchmarks.Recording;

/// <summary>Has the system let go of a file's pages (posix_fadvise, DONTNEED), so that the next reader meets the disk. Linux only; elsewhere the file stays warm.</summary>
internal static partial class ColdFile
{
    private const int DontNeed = 4;

    public static void Forget(string path)
    {
        if (!OperatingSystem.IsLinux())
        {
            return;
        }

        using var file = File.OpenHandle(path, FileMode.Open, FileAccess.ReadWrite, FileShare.ReadWrite);
        RandomAccess.FlushToDisk(file);
        _ = Advise(file, 0, 0, DontNeed);
    }

    [LibraryImport("libc", EntryPoint = "posix_fadvise")]
    private static partial int Advise(SafeFileHandle file, long offset, long length, int advice);
}
