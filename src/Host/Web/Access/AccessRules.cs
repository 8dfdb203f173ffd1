using System.Net;
using Lampwarden.Host.Web.Api;
using Lampwarden.Host.Web.Files;
using Microsoft.AspNetCore.Http.HttpResults;

namespace Lampwarden.Host.Web.Access;

/// <summary>Who may ask what: the name the page was called by, where the request comes from, and the token.</summary>
internal sealed class AccessRules(PageAddress address, WrongTokens wrong, TimeProvider time)
{
    /// <summary>Name of the browser's pass.</summary>
    public const string PassCookie = "lampwarden-pass";

    /// <summary>How long a browser's pass is good: longer than any soak, shorter than a lost telephone is forgotten.</summary>
    public static readonly TimeSpan PassLife = TimeSpan.FromDays(7);

    /// <summary>Whether requests need a token at all.</summary>
    public bool TokenRequired => address.Token is not null;

    /// <summary>Refuses what breaks a rule, each with its reason.</summary>
    public async Task CheckAsync(HttpContext context, RequestDelegate next)
    {
        var refusal = Called(context) ?? Origin(context) ?? Kind(context) ?? Token(context);
        if (refusal is null)
        {
            await next(context);
            return;
        }

        await refusal.ExecuteAsync(context);
    }

    /// <summary>Gives the browser a pass for the right token.</summary>
    public IResult Enter(HttpContext context, string token)
    {
        var from = From(context);
        if (address.Token is null)
        {
            return TypedResults.NoContent();
        }

        if (Waiting(context, from) is { } wait)
        {
            return wait;
        }

        if (!address.Token.Matches(token))
        {
            wrong.Count(from);
            return Problems.Of(StatusCodes.Status401Unauthorized, "That is not the token", "The token is the first line of the file that web.tokenFile names on the host.");
        }

        context.Response.Cookies.Append(PassCookie, address.Token.MakePass(time.GetUtcNow() + PassLife), new CookieOptions
        {
            HttpOnly = true,
            SameSite = SameSiteMode.Strict,
            Secure = context.Request.IsHttps,
            MaxAge = PassLife,
            Path = "/",
        });
        return TypedResults.NoContent();
    }

    // Without a token the page trusts this machine alone. A name that is not this machine's means that a foreign site points
    // its own name here (DNS rebinding), and a forwarding header that a proxy lets others in.
    private ProblemHttpResult? Called(HttpContext context)
    {
        if (TokenRequired)
        {
            return null;
        }

        var headers = context.Request.Headers;
        if (headers.ContainsKey("X-Forwarded-For") || headers.ContainsKey("Forwarded"))
        {
            return Problems.Of(StatusCodes.Status403Forbidden, "A proxy needs a token", "This page is open to its own machine without a token, so it refuses forwarded requests. Set web.tokenFile to serve it through a proxy.");
        }

        return PageAddress.IsThisMachine(context.Request.Host.Host)
            ? null
            : Problems.Of(StatusCodes.Status421MisdirectedRequest, "Called by a strange name", "Without a token the page answers only to localhost, 127.0.0.1 and [::1].");
    }

    // A page of another site may make a browser send requests here; the browser says so, and scripts cannot unsay it.
    private static ProblemHttpResult? Origin(HttpContext context)
    {
        var request = context.Request;
        var site = request.Headers["Sec-Fetch-Site"].ToString();
        var reads = HttpMethods.IsGet(request.Method) || HttpMethods.IsHead(request.Method);
        var foreignSite = site.Length > 0 && site is not ("same-origin" or "none");
        if (foreignSite && (!reads || request.Path.StartsWithSegments("/api")))
        {
            return CrossSite();
        }

        var origin = request.Headers.Origin.ToString();
        return reads || origin.Length == 0 || SameOrigin(origin, request) ? null : CrossSite();
    }

    // Behind a proxy that speaks https the scheme differs while host and port agree.
    private static bool SameOrigin(string origin, HttpRequest request) =>
        Uri.TryCreate(origin, UriKind.Absolute, out var from)
        && HostString.FromUriComponent(from.Authority).Equals(request.Host);

    private static ProblemHttpResult CrossSite() =>
        Problems.Of(StatusCodes.Status403Forbidden, "Another site asked", "Only the page itself may ask this of the host.");

    // Forms of other sites can send text/plain and form data without the browser asking first, but not JSON.
    private static ProblemHttpResult? Kind(HttpContext context)
    {
        var request = context.Request;
        var writes = HttpMethods.IsPost(request.Method) || HttpMethods.IsPut(request.Method) || HttpMethods.IsPatch(request.Method);
        return writes && !request.HasJsonContentType()
            ? Problems.Of(StatusCodes.Status415UnsupportedMediaType, "JSON is expected", "Send Content-Type: application/json.")
            : null;
    }

    // The page's own files hold no secrets; without them nobody could be told how to make a token.
    private ProblemHttpResult? Token(HttpContext context)
    {
        var request = context.Request;
        if (address.Token is null || PageFiles.Has(request.Path) || request.Path.Equals("/api/session", StringComparison.OrdinalIgnoreCase))
        {
            return null;
        }

        if (request.Cookies[PassCookie] is { } pass && address.Token.Accepts(pass, time.GetUtcNow()))
        {
            return null;
        }

        var from = From(context);
        if (Waiting(context, from) is { } wait)
        {
            return wait;
        }

        const string Scheme = "Bearer ";
        var authorization = request.Headers.Authorization.ToString();
        if (authorization.StartsWith(Scheme, StringComparison.OrdinalIgnoreCase))
        {
            if (address.Token.Matches(authorization[Scheme.Length..].Trim()))
            {
                return null;
            }

            wrong.Count(from);
        }

        context.Response.Headers.WWWAuthenticate = "Bearer";
        return Problems.Of(StatusCodes.Status401Unauthorized, "A token is required", "Send Authorization: Bearer with the token, or enter it on the page.");
    }

    private ProblemHttpResult? Waiting(HttpContext context, IPAddress from)
    {
        var wait = wrong.WaitFor(from);
        if (wait <= TimeSpan.Zero)
        {
            return null;
        }

        var seconds = (int)Math.Ceiling(wait.TotalSeconds);
        context.Response.Headers.RetryAfter = seconds.ToString(System.Globalization.CultureInfo.InvariantCulture);
        return Problems.Of(StatusCodes.Status429TooManyRequests, "Too many wrong tokens", $"Wait {seconds} s, then try again.");
    }

    private static IPAddress From(HttpContext context) => context.Connection.RemoteIpAddress ?? IPAddress.None;
}
