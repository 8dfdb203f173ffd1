using System.Net.Sockets;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Configuration;
using MailKit;
using MailKit.Net.Smtp;
using MailKit.Security;
using MimeKit;
using MimeKit.Utils;

namespace Lampwarden.Host.Alerting.Routes;

/// <summary>Mails each change, one connection a message: a connection kept open for days is the one that is dead when it is needed.</summary>
public sealed class MailRoute(string name, MailOptions options, Secret? password, string instance) : IAlertRoute
{
    /// <inheritdoc/>
    public string Name => name;

    /// <inheritdoc/>
    /// <exception cref="RouteException">The server cannot be reached, or asks to come again later.</exception>
    /// <exception cref="RouteRefusedException">The server refuses the log-in or every receiver.</exception>
    public async Task TellAsync(AlertChange change, CancellationToken cancellation)
    {
        using var mail = Compose(AlertMessage.Of(change, instance));
        using var client = new SmtpClient();
        client.ServerCertificateValidationCallback = (_, certificate, _, errors) => CertificatePin.Accept(options.CertificateSha256, certificate, errors);
        // A revocation list is one more server that can be down in the night.
        client.CheckCertificateRevocation = false;
        try
        {
            await client.ConnectAsync(options.Host, options.Port, options.Tls switch
            {
                "tls" => SecureSocketOptions.SslOnConnect,
                "none" => SecureSocketOptions.None,
                _ => SecureSocketOptions.StartTls,
            }, cancellation);
            if (options.User is not null)
            {
                await client.AuthenticateAsync(options.User, password?.Value ?? "", cancellation);
            }

            await client.SendAsync(mail, cancellation);
            await client.DisconnectAsync(quit: true, cancellation);
        }
        catch (AuthenticationException error)
        {
            throw new RouteRefusedException($"{Server} refuses the log-in of {options.User}: look at the password", error);
        }
        catch (SmtpCommandException error)
        {
            // RFC 5321, 4.2.1: 4yz asks to try again, 5yz says never.
            var text = $"{Server} answered {(int)error.StatusCode} {error.Message}";
            throw (int)error.StatusCode >= 500 ? new RouteRefusedException(text, error) : new RouteException(text, error);
        }
        catch (Exception error) when (error is IOException or SocketException or SslHandshakeException or ProtocolException or NotSupportedException or ServiceNotConnectedException or TimeoutException)
        {
            throw new RouteException($"{Server}: {error.Message}", error);
        }
    }

    private string Server => FormattableString.Invariant($"{options.Host}:{options.Port}");

    private MimeMessage Compose(AlertMessage message)
    {
        var mail = new MimeMessage { Subject = message.Subject(), Body = new TextPart("plain") { Text = message.Body() } };
        mail.From.Add(MailboxAddress.Parse(options.From));
        mail.To.AddRange(options.To.Select(MailboxAddress.Parse));
        mail.Date = message.Utc;
        mail.MessageId = MimeUtils.GenerateMessageId();
        // Mail that a machine made: no out-of-office answers, please (RFC 3834, 5).
        mail.Headers.Add("Auto-Submitted", "auto-generated");
        if (message.Severity == Severity.Critical)
        {
            mail.Importance = MessageImportance.High;
        }

        // All changes of one alert make one thread.
        mail.References.Add(FormattableString.Invariant($"alert-{message.RaisedSeconds:F0}-{message.Alert}.{Uri.EscapeDataString(message.Bench)}@{instance}"));
        return mail;
    }
}
