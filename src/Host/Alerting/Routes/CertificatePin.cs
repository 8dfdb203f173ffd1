using System.Net.Security;
using System.Security.Cryptography;
using System.Security.Cryptography.X509Certificates;

namespace Lampwarden.Host.Alerting.Routes;

/// <summary>Whom to trust: the usual chain, or exactly one certificate for a server that made its own.</summary>
internal static class CertificatePin
{
    /// <summary>Judges a certificate.</summary>
    /// <param name="sha256">The pinned certificate's SHA-256 in hex; null for the usual chain.</param>
    public static bool Accept(string? sha256, X509Certificate? certificate, SslPolicyErrors errors) => sha256 is null
        ? errors == SslPolicyErrors.None
        : certificate is not null && CryptographicOperations.FixedTimeEquals(
            SHA256.HashData(certificate.GetRawCertData()), Convert.FromHexString(sha256));
}
