using Lampwarden.Host.Web.Access;

namespace Lampwarden.Host.Web.Api;

/// <summary>A token for a browser's pass.</summary>
/// <param name="Token">As it stands in the file that web.tokenFile names.</param>
public sealed record SessionRequest(string Token)
{
    /// <summary>Without the token: a record would print it wherever it is logged.</summary>
    public override string ToString() => nameof(SessionRequest);
}

/// <summary>Entering and leaving.</summary>
internal static class SessionEndpoint
{
    public static void Map(IEndpointRouteBuilder api)
    {
        api.MapPost("/session", (SessionRequest request, HttpContext context, AccessRules rules) => rules.Enter(context, request.Token ?? ""))
            .WithTags("Access").WithSummary("Gives a browser a pass for the right token")
            .Produces(StatusCodes.Status204NoContent).ProducesProblem(StatusCodes.Status401Unauthorized).ProducesProblem(StatusCodes.Status429TooManyRequests);
        api.MapDelete("/session", (HttpContext context) =>
        {
            context.Response.Cookies.Delete(AccessRules.PassCookie, new CookieOptions { Path = "/", SameSite = SameSiteMode.Strict, HttpOnly = true });
            return TypedResults.NoContent();
        }).WithTags("Access").WithSummary("Takes the browser's pass back");
    }
}
