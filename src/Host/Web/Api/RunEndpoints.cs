using System.ComponentModel;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;
using Microsoft.AspNetCore.Http.HttpResults;

namespace Lampwarden.Host.Web.Api;

/// <summary>The runs: listed, looked at, taken away.</summary>
internal static class RunEndpoints
{
    private const int MostPoints = 5000;

    public static void Map(IEndpointRouteBuilder api)
    {
        var runs = api.MapGroup("/runs").WithTags("Runs");
        runs.MapGet("/", All).WithSummary("Runs, latest first");
        runs.MapGet("/{run}", One).WithSummary("One run with all but its readings");
        runs.MapGet("/{run}/series", Series).WithSummary("A stretch of a run in buckets of least, mean and greatest");
        runs.MapGet("/{run}/attachments/{name}", Attachment).WithSummary("A file kept with a run");
    }

    private static Results<Ok<List<RunLine>>, ProblemHttpResult> All(
        SoakStore store,
        string? bench = null,
        [Description("Unit text or label, whole or in part")] string? unit = null,
        [Description("passed, failed or incomplete")] string? verdict = null,
        DateTimeOffset? fromUtc = null,
        DateTimeOffset? toUtc = null,
        [Description("1 to 10000")] int most = 500)
    {
        Verdict? wanted = verdict is null ? null : Enum.GetValues<Verdict>().Where(value => value.Text() == verdict).Select(value => (Verdict?)value).FirstOrDefault();
        if (wanted is null != (verdict is null) || most is < 1 or > 10_000)
        {
            return Problems.Bad($"verdict is '{verdict}', most is {most}; expected passed, failed or incomplete, and 1 to 10000.");
        }

        return TypedResults.Ok(store.Runs(new RunFilter(bench, unit, fromUtc, toUtc, wanted, most)).Select(RunLine.Of).ToList());
    }

    private static Results<Ok<RunDocument>, ProblemHttpResult> One(string run, SoakStore store) => TypedResults.Ok(RunDocument.Of(store.Run(run)));

    private static Results<Ok<SeriesDocument>, ProblemHttpResult> Series(
        string run,
        SoakStore store,
        double fromSeconds = 0,
        [Description("Above fromSeconds; the end of the run unless given")] double? toSeconds = null,
        [Description("Most buckets, 10 to 5000")] int points = 2000)
    {
        if (!(fromSeconds >= 0) || !(toSeconds is null || toSeconds > fromSeconds) || points is < 10 or > MostPoints)
        {
            return Problems.Bad(FormattableString.Invariant(
                $"fromSeconds is {fromSeconds}, toSeconds {toSeconds}, points {points}; expected 0 <= fromSeconds < toSeconds and 10 to {MostPoints} points."));
        }

        return TypedResults.Ok(SeriesDocument.Of(store.Window(run, fromSeconds, toSeconds ?? double.PositiveInfinity, points)));
    }

    private static FileContentHttpResult Attachment(string run, string name, SoakStore store, HttpContext context)
    {
        var info = store.Run(run).Attachments.LastOrDefault(attachment => attachment.Name == name);
        // Whatever somebody once attached must not run as a page of ours.
        context.Response.Headers.ContentSecurityPolicy = "sandbox; default-src 'none'";
        return TypedResults.File(store.Attachment(run, name), info?.MediaType ?? "application/octet-stream", name);
    }
}
