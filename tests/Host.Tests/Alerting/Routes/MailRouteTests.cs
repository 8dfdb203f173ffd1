using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Routes;
using Lampwarden.Host.Configuration;
using SmtpServer.Protocol;

namespace Lampwarden.Host.Tests.Alerting.Routes;

public sealed class MailRouteTests : IDisposable
{
    private readonly string _passwordFile = Path.GetTempFileName();

    public MailRouteTests() => File.WriteAllText(_passwordFile, "correct horse\n");

    public void Dispose() => File.Delete(_passwordFile);

    private static CancellationToken Token => TestContext.Current.CancellationToken;

    private MailRoute Make(MailPeer peer, string tls = "none", string? pin = null, string? user = null)
    {
        var options = new MailOptions { Host = "127.0.0.1", Port = peer.Port, Tls = tls, CertificateSha256 = pin, From = "bench@shop.example", User = user };
        options.To.Add("night@shop.example");
        return new MailRoute("mail", options, Secret.Read(_passwordFile, null, "passwordFile"), "shop-1");
    }

    [Fact]
    public async Task TellAsync_ACriticalAlert_ArrivesAsImportantMail()
    {
        await using var peer = new MailPeer();
        await peer.UntilListeningAsync();
        await Make(peer).TellAsync(Told.Change(), Token);
        var mail = Assert.Single(peer.Mails);
        Assert.Contains("Subject: [critical] bay-3: hard-short raised", mail, StringComparison.Ordinal);
        Assert.Contains("Importance: high", mail, StringComparison.Ordinal);
        Assert.Contains("Auto-Submitted: auto-generated", mail, StringComparison.Ordinal);
        Assert.Contains("The line current is that of a short.", mail, StringComparison.Ordinal);
        Assert.Contains("treat every part behind them as live", mail, StringComparison.Ordinal);
    }

    [Fact]
    public async Task TellAsync_AGroup_NamesEveryAlertInIt()
    {
        await using var peer = new MailPeer();
        await peer.UntilListeningAsync();
        var group = new AlertChange(0, AlertSteps.Grouped, Told.Change().Alert) { Utc = Told.Utc, Group = [Told.Change(1, bench: "bay-1"), Told.Change(2, bench: "bay-2")] };
        await Make(peer).TellAsync(group, Token);
        Assert.Contains("bay-1  alert 1", peer.Mails[0], StringComparison.Ordinal);
        Assert.Contains("bay-2  alert 2", peer.Mails[0], StringComparison.Ordinal);
    }

    [Fact]
    public async Task TellAsync_OverStartTlsWithThePinnedCertificate_LogsInAndArrives()
    {
        await using var peer = new MailPeer(encrypted: true);
        await peer.UntilListeningAsync();
        await Make(peer, "startTls", peer.CertificateSha256, "bench").TellAsync(Told.Change(), Token);
        Assert.Single(peer.Mails);
        Assert.True(peer.LastWasEncrypted);
    }

    [Theory]
    [InlineData(null)]
    [InlineData("00112233445566778899AABBCCDDEEFF00112233445566778899AABBCCDDEEFF")]
    public async Task TellAsync_AnUnknownCertificate_IsNotTrusted(string? pin)
    {
        await using var peer = new MailPeer(encrypted: true);
        await peer.UntilListeningAsync();
        await Assert.ThrowsAsync<RouteException>(() => Make(peer, "startTls", pin, "bench").TellAsync(Told.Change(), Token));
        Assert.Empty(peer.Mails);
    }

    [Fact]
    public async Task TellAsync_AServerWithoutStartTls_IsNotSpokenToInTheClear()
    {
        await using var peer = new MailPeer();
        await peer.UntilListeningAsync();
        await Assert.ThrowsAsync<RouteException>(() => Make(peer, "startTls").TellAsync(Told.Change(), Token));
        Assert.Empty(peer.Mails);
    }

    [Fact]
    public async Task TellAsync_AWrongPassword_IsRefusedWithoutShowingIt()
    {
        await using var peer = new MailPeer(encrypted: true);
        await peer.UntilListeningAsync();
        await File.WriteAllTextAsync(_passwordFile, "wrong staple", Token);
        var error = await Assert.ThrowsAsync<RouteRefusedException>(() => Make(peer, "startTls", peer.CertificateSha256, "bench").TellAsync(Told.Change(), Token));
        Assert.DoesNotContain("wrong staple", error.ToString(), StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(450, false)]
    [InlineData(452, false)]
    [InlineData(550, true)]
    [InlineData(554, true)]
    public async Task TellAsync_AnAnswerOfTheServer_SaysLaterOrNever(int code, bool never)
    {
        await using var peer = new MailPeer(answer: new SmtpResponse((SmtpReplyCode)code, "as the test says"));
        await peer.UntilListeningAsync();
        var error = await Assert.ThrowsAnyAsync<RouteException>(() => Make(peer).TellAsync(Told.Change(), Token));
        Assert.Equal(never, error is RouteRefusedException);
        Assert.Contains(FormattableString.Invariant($"{code}"), error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public async Task TellAsync_NobodyListening_MayBeTriedAgain()
    {
        var options = new MailOptions { Host = "127.0.0.1", Port = WebhookRouteTests.FreePort(), Tls = "none", From = "bench@shop.example" };
        options.To.Add("night@shop.example");
        await Assert.ThrowsAsync<RouteException>(() => new MailRoute("mail", options, null, "shop-1").TellAsync(Told.Change(), Token));
    }

    [Fact]
    public void Secret_WhereverItIsShown_KeepsItsText()
    {
        var secret = Secret.Read(_passwordFile, null, "passwordFile")!;
        Assert.Equal("correct horse", secret.Value);
        Assert.DoesNotContain("correct horse", secret.ToString(), StringComparison.Ordinal);
    }

    [Fact]
    public void Secret_NamedButNotThere_IsAFaultOfTheConfiguration()
    {
        var error = Assert.Throws<ConfigurationException>(() => Secret.Read(null, "LW_TEST_NO_SUCH_VARIABLE", "alerts.routes[0].mail.passwordFile"));
        Assert.Contains("alerts.routes[0].mail.passwordFile is 'LW_TEST_NO_SUCH_VARIABLE'", error.Message, StringComparison.Ordinal);
    }
}
