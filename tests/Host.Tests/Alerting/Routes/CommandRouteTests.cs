using Lampwarden.Host.Alerting.Routes;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Tests.Alerting.Routes;

public sealed class CommandRouteTests : IDisposable
{
    private readonly DirectoryInfo _folder = Directory.CreateTempSubdirectory("lw-command-");

    public CommandRouteTests() => Outside.Need(File.Exists("/bin/sh"), "there is no /bin/sh");

    public void Dispose() => _folder.Delete(recursive: true);

    private static CancellationToken Token => TestContext.Current.CancellationToken;

    private string Out => Path.Combine(_folder.FullName, "out");

    private static CommandRoute Make(string script)
    {
        var options = new RunOptions { Program = "/bin/sh" };
        options.Arguments.Add("-c");
        options.Arguments.Add(script);
        return new CommandRoute("pager", options, "shop-1");
    }

    [Fact]
    public async Task TellAsync_Exit0_WasGivenTheJsonAndTheFacts()
    {
        await Make($"(echo $LAMPWARDEN_SEVERITY $LAMPWARDEN_BENCH $LAMPWARDEN_CAUSE; cat) > {Out}").TellAsync(Told.Change(), Token);
        var text = await File.ReadAllTextAsync(Out, Token);
        Assert.StartsWith("critical bay-3 hard-short\n{", text, StringComparison.Ordinal);
        Assert.Contains("\"what\":\"raised\"", text, StringComparison.Ordinal);
    }

    [Fact]
    public async Task TellAsync_AnotherExitCode_SaysWhatTheProgramSaid()
    {
        var error = await Assert.ThrowsAsync<RouteException>(() => Make("echo no modem >&2; exit 7").TellAsync(Told.Change(), Token));
        Assert.Equal("/bin/sh ended with 7: no modem", error.Message);
    }

    [Fact]
    public async Task TellAsync_NoSuchProgram_SaysSo()
    {
        var error = await Assert.ThrowsAsync<RouteException>(() =>
            new CommandRoute("pager", new RunOptions { Program = "/nonexistent/page" }, "shop-1").TellAsync(Told.Change(), Token));
        Assert.StartsWith("/nonexistent/page cannot be started:", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public async Task TellAsync_Cancelled_KillsTheProgramAndItsChildren()
    {
        using var soon = new CancellationTokenSource();
        var telling = Make($"echo $$ > {Out}; sleep 60 & wait").TellAsync(Told.Change(), soon.Token);
        await Patience.UntilAsync(() => File.Exists(Out) && File.ReadAllText(Out).EndsWith('\n'));
        var id = int.Parse(await File.ReadAllTextAsync(Out, Token), System.Globalization.CultureInfo.InvariantCulture);
        await soon.CancelAsync();
        await Assert.ThrowsAnyAsync<OperationCanceledException>(() => telling);
        await Patience.UntilAsync(() => !Directory.Exists($"/proc/{id}"));
    }

    [Fact]
    public async Task TellAsync_AProgramThatFloodsItsOutput_DoesNotBlock() =>
        await Make("head -c 3000000 /dev/zero; head -c 3000000 /dev/zero >&2").TellAsync(Told.Change(), Token);

    [Fact]
    public async Task TellAsync_AProgramThatReadsNothing_StillCounts() =>
        await Make("exec <&-; exit 0").TellAsync(Told.Change(), Token);

    [Fact]
    public async Task TellAsync_TheServicesOwnSecrets_AreNotHandedOn()
    {
        Environment.SetEnvironmentVariable("LAMPWARDEN_TEST_SECRET", "correct horse");
        await Make($"env > {Out}").TellAsync(Told.Change(), Token);
        Environment.SetEnvironmentVariable("LAMPWARDEN_TEST_SECRET", null);
        Assert.DoesNotContain("correct horse", await File.ReadAllTextAsync(Out, Token), StringComparison.Ordinal);
    }
}
