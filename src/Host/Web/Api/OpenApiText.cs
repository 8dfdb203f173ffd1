using Microsoft.AspNetCore.OpenApi;

namespace Lampwarden.Host.Web.Api;

/// <summary>The head of the OpenAPI document.</summary>
internal static class OpenApiText
{
    public static void Configure(OpenApiOptions options) => options.AddDocumentTransformer((document, _, _) =>
    {
        document.Info = new()
        {
            Title = "Lampwarden",
            Version = Product.Version,
            Description = "Benches, runs and predictions of this host. Names are those of the command line's JSON documents: camelCase with the unit "
                + "as last word, SI; a number that cannot be given is null. Errors are problem details (RFC 9457). On any address but loopback, "
                + "or where web.tokenFile is set, send Authorization: Bearer with the token.",
        };
        return Task.CompletedTask;
    });
}
