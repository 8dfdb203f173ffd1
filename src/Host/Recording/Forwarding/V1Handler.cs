using System.Net.Http.Headers;
using System.Text;
using System.Web;

namespace Lampwarden.Host.Recording.Forwarding;

/// <summary>
/// Lets the client, which speaks the v2 interface, write into InfluxDB 1.x: <c>/api/v2/write?bucket=X</c> becomes
/// <c>/write?db=X</c>, and a token of the form user:password becomes basic authentication.
/// </summary>
internal sealed class V1Handler(string? token) : DelegatingHandler(new SocketsHttpHandler())
{
    protected override Task<HttpResponseMessage> SendAsync(HttpRequestMessage request, CancellationToken cancellationToken)
    {
        if (request.RequestUri is { } address && address.AbsolutePath.EndsWith("/api/v2/write", StringComparison.Ordinal))
        {
            var asked = HttpUtility.ParseQueryString(address.Query);
            var path = address.AbsolutePath[..^"/api/v2/write".Length];
            request.RequestUri = new Uri(
                $"{address.GetLeftPart(UriPartial.Authority)}{path}/write?db={Uri.EscapeDataString(asked["bucket"] ?? "")}&precision={asked["precision"]}");
        }

        request.Headers.Authorization = token?.Contains(':', StringComparison.Ordinal) == true
            ? new AuthenticationHeaderValue("Basic", Convert.ToBase64String(Encoding.UTF8.GetBytes(token)))
            : null;
        return base.SendAsync(request, cancellationToken);
    }
}
