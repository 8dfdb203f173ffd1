using System.Diagnostics;

namespace Lampwarden.Host.Tests.Recording;

/// <summary>A disk of a few megabytes in memory (tmpfs). Mounting needs root: elsewhere the test skips and says so.</summary>
internal sealed class SmallDisk : IDisposable
{
    private readonly TempFolder _folder = new();

    public string Path => _folder.Path;

    public static SmallDisk Mount(string size)
    {
        var disk = new SmallDisk();
        var mounted = OperatingSystem.IsLinux() && Run("mount", "-t", "tmpfs", "-o", $"size={size}", "tmpfs", disk.Path);
        if (!mounted)
        {
            disk._folder.Dispose();
        }

        // Not a program that could be installed: in a container even root may not mount, so this skips wherever it must.
        Assert.SkipUnless(mounted, "a small file system in memory cannot be mounted here (Linux and the right to mount are needed)");
        return disk;
    }

    /// <summary>Takes every free byte.</summary>
    /// <returns>The file to delete to have them back.</returns>
    public string Fill()
    {
        var path = System.IO.Path.Combine(Path, "ballast");
        using var file = new FileStream(path, FileMode.Create, FileAccess.Write, FileShare.None, 1);
        try
        {
            for (var block = new byte[4096]; ;)
            {
                file.Write(block);
            }
        }
        catch (IOException)
        {
            return path;
        }
    }

    public void MakeReadOnly() => Assert.True(Run("mount", "-o", "remount,ro", Path));

    public void Dispose()
    {
        Run("umount", Path);
        _folder.Dispose();
    }

    private static bool Run(string program, params string[] arguments)
    {
        try
        {
            using var process = Process.Start(new ProcessStartInfo(program, arguments) { RedirectStandardError = true })!;
            process.WaitForExit();
            return process.ExitCode == 0;
        }
        catch (System.ComponentModel.Win32Exception)
        {
            return false;
        }
    }
}
