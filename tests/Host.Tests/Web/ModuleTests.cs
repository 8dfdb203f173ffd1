using System.Diagnostics;

namespace Lampwarden.Host.Tests.Web;

/// <summary>The page's pure modules have tests of their own, in the language they are written in.</summary>
public sealed class ModuleTests
{
    [Fact]
    public async Task Modules_UnderNode_PassTheirTests()
    {
        var node = Outside.Program("node");
        var folder = Path.Combine(Repository.Root(), "tests", "Host.Tests", "Web", "modules");
        using var run = Process.Start(new ProcessStartInfo(node, ["--test", folder]) { RedirectStandardOutput = true, RedirectStandardError = true })!;
        var output = run.StandardOutput.ReadToEndAsync(TestContext.Current.CancellationToken);
        var error = run.StandardError.ReadToEndAsync(TestContext.Current.CancellationToken);
        await run.WaitForExitAsync(TestContext.Current.CancellationToken);

        Assert.True(run.ExitCode == 0, await output + await error);
        // A pattern that finds no file passes too.
        Assert.Matches(@"# pass [1-9]\d", await output);
    }
}
