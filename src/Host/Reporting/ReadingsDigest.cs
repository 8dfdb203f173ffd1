using System.Security.Cryptography;
using System.Text;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Recording.Exchange;

namespace Lampwarden.Host.Reporting;

/// <summary>
/// SHA-256 over a run's readings, defined as that of the bytes <c>export RUN --format csv</c> writes, so that anybody can
/// check it with any tool that knows SHA-256.
/// </summary>
public static class ReadingsDigest
{
    /// <summary>Lower-case hexadecimal.</summary>
    public static string Of(SoakStore store, string run)
    {
        using var hash = SHA256.Create();
        using (var stream = new CryptoStream(Stream.Null, hash, CryptoStreamMode.Write))
        using (var writer = new StreamWriter(stream, new UTF8Encoding(false)))
        {
            CsvSeries.Write(writer, store.Readings(run), store.HasVolts(run));
        }

        return Convert.ToHexStringLower(hash.Hash!);
    }
}
