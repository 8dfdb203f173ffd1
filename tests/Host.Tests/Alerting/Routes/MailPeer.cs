using System.Buffers;
using System.Net;
using System.Net.Sockets;
using System.Security.Cryptography;
using System.Security.Cryptography.X509Certificates;
using System.Text;
using SmtpServer;
using SmtpServer.Authentication;
using SmtpServer.ComponentModel;
using SmtpServer.Protocol;
using SmtpServer.Storage;

namespace Lampwarden.Host.Tests.Alerting.Routes;

/// <summary>A mail server in this process (the SmtpServer library), with a certificate of its own making where wanted.</summary>
internal sealed class MailPeer : MessageStore, IUserAuthenticator, IAsyncDisposable
{
    private readonly CancellationTokenSource _stop = new();
    private readonly Task _running;
    private readonly X509Certificate2? _certificate;

    public MailPeer(bool encrypted = false, SmtpResponse? answer = null)
    {
        Answer = answer ?? SmtpResponse.Ok;
        Port = WebhookRouteTests.FreePort();
        _certificate = encrypted ? MakeCertificate() : null;
        var options = new SmtpServerOptionsBuilder().ServerName("mail.bench.example").Endpoint(endpoint =>
        {
            endpoint.Endpoint(new IPEndPoint(IPAddress.Loopback, Port)).AllowUnsecureAuthentication(!encrypted).AuthenticationRequired(encrypted);
            if (_certificate is not null)
            {
                endpoint.Certificate(_certificate);
            }
        }).Build();
        var services = new ServiceProvider();
        services.Add(new StoreFactory(this));
        services.Add(new AuthenticatorFactory(this));
        _running = new SmtpServer.SmtpServer(options, services).StartAsync(_stop.Token);
    }

    public int Port { get; }

    public SmtpResponse Answer { get; set; }

    public List<string> Mails { get; } = [];

    public bool LastWasEncrypted { get; private set; }

    public string CertificateSha256 => Convert.ToHexString(SHA256.HashData(_certificate!.RawData));

    public override Task<SmtpResponse> SaveAsync(ISessionContext context, IMessageTransaction transaction, ReadOnlySequence<byte> buffer, CancellationToken cancellationToken)
    {
        LastWasEncrypted = context.Pipe.IsSecure;
        Mails.Add(Encoding.UTF8.GetString(buffer.ToArray()));
        return Task.FromResult(Answer);
    }

    public Task<bool> AuthenticateAsync(ISessionContext context, string user, string password, CancellationToken cancellationToken) =>
        Task.FromResult(user == "bench" && password == "correct horse");

    public async Task UntilListeningAsync()
    {
        for (var attempt = 0; ; attempt++)
        {
            try
            {
                using var client = new TcpClient();
                await client.ConnectAsync(IPAddress.Loopback, Port);
                return;
            }
            catch (SocketException) when (attempt < 200)
            {
                await Task.Delay(10);
            }
        }
    }

    public async ValueTask DisposeAsync()
    {
        await _stop.CancelAsync();
        try
        {
            await _running.WaitAsync(TimeSpan.FromSeconds(5));
        }
        catch (Exception error) when (error is OperationCanceledException or TimeoutException)
        {
            // It ends with its token.
        }

        _certificate?.Dispose();
        _stop.Dispose();
    }

    private static X509Certificate2 MakeCertificate()
    {
        using var key = RSA.Create(2048);
        var request = new CertificateRequest("CN=mail.bench.example", key, HashAlgorithmName.SHA256, RSASignaturePadding.Pkcs1);
        using var made = request.CreateSelfSigned(DateTimeOffset.UnixEpoch, new DateTimeOffset(2200, 1, 1, 0, 0, 0, TimeSpan.Zero));
        return X509CertificateLoader.LoadPkcs12(made.Export(X509ContentType.Pfx), null);
    }

    private sealed class StoreFactory(MailPeer peer) : IMessageStoreFactory
    {
        public IMessageStore CreateInstance(ISessionContext context) => peer;
    }

    private sealed class AuthenticatorFactory(MailPeer peer) : IUserAuthenticatorFactory
    {
        public IUserAuthenticator CreateInstance(ISessionContext context) => peer;
    }
}
