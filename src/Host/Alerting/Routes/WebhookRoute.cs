using System.Globalization;
using System.Net;
using System.Net.Http.Headers;
using System.Security.Cryptography;
using System.Text;
using System.Text.Json;
using Lampwarden.Host.Commands;

namespace Lampwarden.Host.Alerting.Routes;

/// <summary>
/// Posts each change as JSON, signed so that the receiver knows who sent it and when: header <c>Lampwarden-Signature</c> is
/// the lower-case hex HMAC-SHA256 of <c>timestamp.body</c> under the shared secret, with <c>Lampwarden-Timestamp</c> in Unix seconds.
/// </summary>
public sealed class WebhookRoute(string name, Uri url, Secret? secret, string instance, TimeProvider time) : IAlertRoute, IDisposable
{
    // Redirects are not followed: a signed message goes where the user said and nowhere else.
    private readonly HttpClient _client = new(new SocketsHttpHandler
    {
        AllowAutoRedirect = false,
        UseCookies = false,
        PooledConnectionLifetime = TimeSpan.FromMinutes(2),
        ConnectTimeout = TimeSpan.FromSeconds(10),
        MaxResponseHeadersLength = 16,
    })
    { Timeout = Timeout.InfiniteTimeSpan };

    /// <inheritdoc/>
    public string Name => name;

    /// <inheritdoc/>
    /// <exception cref="RouteException">No answer, or one that says later.</exception>
    /// <exception cref="RouteRefusedException">An answer that says never.</exception>
    public async Task TellAsync(AlertChange change, CancellationToken cancellation)
    {
        var message = AlertMessage.Of(change, instance);
        var body = JsonSerializer.SerializeToUtf8Bytes(message, Json.Compact);
        using var request = new HttpRequestMessage(HttpMethod.Post, url) { Content = new ByteArrayContent(body) };
        request.Content.Headers.ContentType = new MediaTypeHeaderValue("application/json");
        request.Headers.TryAddWithoutValidation("Lampwarden-Delivery", Convert.ToHexStringLower(SHA256.HashData(Encoding.UTF8.GetBytes(message.Delivery)))[..32]);
        if (secret is not null)
        {
            var stamp = time.GetUtcNow().ToUnixTimeSeconds().ToString(CultureInfo.InvariantCulture);
            request.Headers.Add("Lampwarden-Timestamp", stamp);
            request.Headers.Add("Lampwarden-Signature", Sign(secret.Value, stamp, body));
        }

        HttpResponseMessage answer;
        try
        {
            // The answer's body says nothing we need: it is never read, so it cannot fill memory or hold us up.
            answer = await _client.SendAsync(request, HttpCompletionOption.ResponseHeadersRead, cancellation);
        }
        catch (HttpRequestException error)
        {
            throw new RouteException($"{url.GetLeftPart(UriPartial.Authority)} cannot be reached: {error.Message}", error);
        }

        using (answer)
        {
            Judge(answer);
        }
    }

    /// <inheritdoc/>
    public void Dispose() => _client.Dispose();

    /// <summary>The signature of a body.</summary>
    public static string Sign(string secret, string timestamp, ReadOnlySpan<byte> body)
    {
        using var hash = IncrementalHash.CreateHMAC(HashAlgorithmName.SHA256, Encoding.UTF8.GetBytes(secret));
        hash.AppendData(Encoding.ASCII.GetBytes(timestamp + "."));
        hash.AppendData(body);
        return Convert.ToHexStringLower(hash.GetHashAndReset());
    }

    private void Judge(HttpResponseMessage answer)
    {
        if (answer.IsSuccessStatusCode)
        {
            return;
        }

        var text = $"{url.GetLeftPart(UriPartial.Authority)} answered {(int)answer.StatusCode}";
        if (answer.StatusCode is HttpStatusCode.RequestTimeout or HttpStatusCode.TooManyRequests or (HttpStatusCode)425 || (int)answer.StatusCode >= 500)
        {
            var after = answer.Headers.RetryAfter;
            throw new RouteException(text) { RetryAfter = after?.Delta ?? (after?.Date is { } date ? date - time.GetUtcNow() : null) };
        }

        throw new RouteRefusedException((int)answer.StatusCode < 400
            ? $"{text}: redirects are not followed; put the final address into the configuration"
            : $"{text}: it will not take this message; look at the address and the secret");
    }
}
