using Xunit;

namespace Lampwarden.Tests;

/// <summary>
/// Checks that need a program of the system. Where it is missing the test skips and says so; with
/// LAMPWARDEN_ALL_CHECKS=1 (continuous integration) it fails instead, so that nothing is skipped unseen.
/// </summary>
internal static class Outside
{
    /// <summary>The full path of a program on PATH; skips (or fails) the test where there is none.</summary>
    public static string Program(string name)
    {
        foreach (var folder in (Environment.GetEnvironmentVariable("PATH") ?? "").Split(Path.PathSeparator).Append("/usr/sbin"))
        {
            var path = Path.Combine(folder, name);
            if (File.Exists(path))
            {
                return path;
            }
        }

        Need(false, $"the program '{name}' is not installed");
        return "";
    }

    /// <summary>Skips (or fails) the test unless something of the system is there.</summary>
    public static void Need(bool present, string reason)
    {
        if (!present && Environment.GetEnvironmentVariable("LAMPWARDEN_ALL_CHECKS") == "1")
        {
            Assert.Fail($"This check may not be skipped here: {reason}.");
        }

        Assert.SkipUnless(present, reason);
    }
}
