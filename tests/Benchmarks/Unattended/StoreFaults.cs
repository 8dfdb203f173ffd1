using System.Diagnostics;

namespace Lampwarden.Benchmarks.Unattended;

/// <summary>Faults of store, disk and the server that readings are forwarded to.</summary>
internal static class StoreFaults
{
    public static IEnumerable<Fault> All =>
    [
        new("disk", "the disk fills up in mid-run, and the unit shorts meanwhile", "watch and alerts go on, the trouble is told, and what waited is stored when there is room", FullAsync),
        new("store", "a second service on the same record folder", "refused with a clear message and exit code 3; the first is untouched", SecondAsync),
        new("store", "the store's file is overwritten with garbage while the service is down", "a clear refusal to start, exit code 3, and the file is left as it is", GarbageAsync),
        new("store", "the record folder is a file", "a clear refusal to start, exit code 3", NoFolderAsync),
        new("server", "the InfluxDB server to forward to is not there", "nothing is held up: every poll stored, alerts told", NoServerAsync),
        new("server", "the InfluxDB server accepts and never answers", "nothing is held up: every poll stored, alerts told", SilentServerAsync),
    ];

    private static async Task<string> FullAsync()
    {
        var disk = Directory.CreateTempSubdirectory("lw-small-");
        if (!await RanAsync("mount", "-t", "tmpfs", "-o", "size=3m", "tmpfs", disk.FullName))
        {
            throw new NotHereException("a small file system cannot be mounted here (needs root)");
        }

        try
        {
            using var inbox = new Inbox();
            await using var shift = Shift.Prepare(Shift.Short(16), disk.FullName);
            await shift.StartAsync($$"""{ "routes": [ {{inbox.Route("far")}} ] }""", readings: 40);
            var ballast = Path.Combine(disk.FullName, "ballast");
            Fill(ballast);
            var trouble = await inbox.UntilAsync(letter => letter.Cause == "store-trouble", "an alert store-trouble");
            await inbox.UntilAsync(letter => letter.Cause == "hard-short", "the alert of the short");
            File.Delete(ballast);
            await inbox.UntilAsync(letter => letter is { Cause: "store-trouble", What: "returned" }, "the store works again");
            await shift.StopAsync();
            return $"told: {trouble.Text.Split('.')[0]}; hard-short told while the disk was full; {shift.Balance()}";
        }
        finally
        {
            await RanAsync("umount", "-l", disk.FullName);
            disk.Delete();
        }
    }

    private static async Task<string> SecondAsync()
    {
        await using var shift = Shift.Prepare();
        await shift.StartAsync();
        var first = shift.Process;
        shift.Launch();
        await shift.Process.WaitForExitAsync();
        BrokenPromiseException.Unless(shift.Process.ExitCode == 3 && !first.HasExited, $"exit code {shift.Process.ExitCode}, first ended: {first.HasExited}");
        return $"exit code 3: {LastLine(shift)}";
    }

    private static async Task<string> GarbageAsync()
    {
        await using var shift = Shift.Prepare();
        await shift.StartAsync();
        await shift.StopAsync();
        var file = Path.Combine(shift.Folder, "soaks.db");
        var garbage = new byte[8192];
        new Random(1).NextBytes(garbage);
        await File.WriteAllBytesAsync(file, garbage);
        shift.Launch();
        await shift.Process.WaitForExitAsync();
        BrokenPromiseException.Unless(shift.Process.ExitCode == 3, $"exit code {shift.Process.ExitCode}");
        BrokenPromiseException.Unless((await File.ReadAllBytesAsync(file)).AsSpan().SequenceEqual(garbage), "the file was changed");
        return $"exit code 3: {LastLine(shift)}";
    }

    private static async Task<string> NoFolderAsync()
    {
        var file = Path.GetTempFileName();
        await using var shift = Shift.Prepare(folder: file);
        shift.Write();
        shift.Launch();
        await shift.Process.WaitForExitAsync();
        File.Delete(file);
        BrokenPromiseException.Unless(shift.Process.ExitCode == 3, $"exit code {shift.Process.ExitCode}: {shift.Errors}");
        return $"exit code 3: {LastLine(shift)}";
    }

    private static async Task<string> NoServerAsync()
    {
        using var inbox = new Inbox();
        int port;
        using (var gone = new Inbox())
        {
            port = gone.Port;
        }

        return await ForwardAsync(inbox, port);
    }

    private static async Task<string> SilentServerAsync()
    {
        using var inbox = new Inbox();
        using var server = new Inbox { Status = 0 };
        return await ForwardAsync(inbox, server.Port);
    }

    private static async Task<string> ForwardAsync(Inbox inbox, int port)
    {
        Environment.SetEnvironmentVariable("LAMPWARDEN_INFLUX_TOKEN", "any");
        await using var shift = Shift.Prepare(Shift.Short(6));
        await shift.StartAsync(
            $$"""{ "routes": [ {{inbox.Route("far")}} ] }""",
            $$""", "recording": { "influx": { "url": "http://127.0.0.1:{{port}}", "org": "shop", "bucket": "soaks" } }""");
        await inbox.UntilAsync(letter => letter.Cause == "hard-short", "the alert of the short");
        await shift.StopAsync();
        return $"hard-short told; {shift.Balance()}";
    }

    private static string LastLine(Shift shift) => shift.Errors.Split('\n', StringSplitOptions.RemoveEmptyEntries)[^1].Replace(shift.Folder, "FOLDER").Trim();

    private static void Fill(string path)
    {
        using var file = new FileStream(path, FileMode.Create, FileAccess.Write, FileShare.None, 1);
        try
        {
            while (true)
            {
                file.Write(new byte[4096]);
            }
        }
        catch (IOException)
        {
            // Full.
        }
    }

    internal static async Task<bool> RanAsync(string program, params string[] words)
    {
        using var process = Process.Start(new ProcessStartInfo(program, words) { RedirectStandardError = true, RedirectStandardOutput = true })!;
        await process.WaitForExitAsync();
        return process.ExitCode == 0;
    }
}
