using Lampwarden.Analysis.Lamps;
using Lampwarden.Host.Recording;
using Microsoft.AspNetCore.Diagnostics;
using Microsoft.AspNetCore.Http.HttpResults;

namespace Lampwarden.Host.Web.Api;

/// <summary>Errors as problem details (RFC 9457): what, and what to do.</summary>
internal static class Problems
{
    /// <summary>One problem.</summary>
    public static ProblemHttpResult Of(int status, string title, string detail) =>
        TypedResults.Problem(detail: detail, statusCode: status, title: title);

    /// <summary>There is no such thing.</summary>
    public static ProblemHttpResult NotFound(string what, string name, string instead) =>
        Of(StatusCodes.Status404NotFound, $"No such {what}", $"There is no {what} '{name}'. {instead}");

    /// <summary>Bad input of the caller.</summary>
    public static ProblemHttpResult Bad(string detail) => Of(StatusCodes.Status400BadRequest, "That cannot be", detail);

    /// <summary>Answers an exception that an endpoint let through.</summary>
    public static Task AnswerAsync(HttpContext context)
    {
        var error = context.Features.Get<IExceptionHandlerFeature>()?.Error;
        var problem = error switch
        {
            TextFormatException text => Positioned(text),
            FormatException or ArgumentException => Bad(error.Message),
            Commands.BadInputException => Bad(error.Message),
            BadHttpRequestException bad => Of(bad.StatusCode, "The request cannot be read", bad.InnerException?.Message ?? bad.Message),
            StoreException when error.Message.StartsWith("There is no run", StringComparison.Ordinal) || error.Message.Contains("has no attachment", StringComparison.Ordinal) =>
                Of(StatusCodes.Status404NotFound, "No such run", error.Message),
            StoreException => Of(StatusCodes.Status503ServiceUnavailable, "The record cannot be read or written", error.Message),
            // What went wrong inside is for the log; a stranger learns nothing from it.
            _ => Of(StatusCodes.Status500InternalServerError, "The host failed at this", "See the host's log."),
        };
        return problem.ExecuteAsync(context);
    }

    private static ProblemHttpResult Positioned(TextFormatException error) => TypedResults.Problem(
        detail: error.Message,
        statusCode: StatusCodes.Status400BadRequest,
        title: "That text cannot be read",
        extensions: new Dictionary<string, object?> { ["input"] = error.Input, ["position"] = error.Position });
}
