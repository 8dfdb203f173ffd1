using System.ComponentModel;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Web.Live;
using Microsoft.AspNetCore.Http.HttpResults;

namespace Lampwarden.Host.Web.Api;

/// <summary>Something a person tells the watch.</summary>
/// <param name="Kind">load-changed, lamp-switched, cycles-by-itself or meter-changed.</param>
/// <param name="Detail">In the person's words, at most 500 characters; kept with the run.</param>
public sealed record AnnounceRequest(string? Kind, string? Detail = null);

/// <summary>Something a person writes about a run.</summary>
/// <param name="Text">1 to 2000 characters.</param>
/// <param name="Author">Who.</param>
public sealed record NoteRequest(string Text, string? Author = null);

/// <summary>The benches: how they are, and what a person does with them.</summary>
internal static class BenchEndpoints
{
    private const int LongestNote = 2000;
    private const int LongestDetail = 500;

    public static void Map(IEndpointRouteBuilder api)
    {
        var benches = api.MapGroup("/benches").WithTags("Benches");
        benches.MapGet("/", All).WithSummary("Every bench as it is now, in the order of the configuration");
        benches.MapGet("/{bench}", One).WithSummary("One bench as it is now");
        benches.MapGet("/{bench}/trace", Trace).WithSummary("The trace of the bench's run so far, for a first drawing");
        benches.MapPost("/{bench}/soak", Start).WithSummary("Starts a soak: it waits for current from then on");
        benches.MapPost("/{bench}/soak/end", End).WithSummary("Ends the soak and judges it; the mains is not switched");
        benches.MapPost("/{bench}/announcements", AnnounceAsync).WithSummary("Tells the watch what a person did, so that it is not taken for a fault");
        benches.MapPost("/{bench}/bring-up/next", NextAsync).WithSummary("Says that the next lamp of the bring-up is in");
        benches.MapPost("/{bench}/bring-up/leave", LeaveAsync).WithSummary("Leaves the bring-up where it is");
        benches.MapPost("/{bench}/notes", NoteAsync).WithSummary("Keeps a note with the bench's run");
    }

    private static Ok<List<BenchDocument>> All(LiveBoard board) => TypedResults.Ok(board.Names.Select(name => board.Bench(name)!).ToList());

    private static Results<Ok<BenchDocument>, ProblemHttpResult> One(string bench, LiveBoard board) =>
        board.Bench(bench) is { } document ? TypedResults.Ok(document) : Desks.Missing(bench);

    private static Results<Ok<TraceDocument>, ProblemHttpResult> Trace(string bench, LiveBoard board) =>
        board.Trace(bench) is { } trace ? TypedResults.Ok(trace) : Desks.Missing(bench);

    private static Results<Accepted, ProblemHttpResult> Start(string bench, SoakRequest request, Desks desks)
    {
        if (desks.Find(bench) is not { } desk)
        {
            return Desks.Missing(bench);
        }

        return desk.TryStart(request)
            ? TypedResults.Accepted($"/api/benches/{Uri.EscapeDataString(bench)}")
            : Problems.Of(StatusCodes.Status409Conflict, "The bench is not free", $"{bench} is soaking, waits for current, or ends with its only soak. End that soak first.");
    }

    private static Results<Accepted, ProblemHttpResult> End(string bench, Desks desks)
    {
        if (desks.Find(bench) is not { } desk)
        {
            return Desks.Missing(bench);
        }

        return desk.TryEnd()
            ? TypedResults.Accepted($"/api/benches/{Uri.EscapeDataString(bench)}")
            : Problems.Of(StatusCodes.Status409Conflict, "Nothing to end", $"{bench} is not soaking, or its soak cannot be ended from the page (a rehearsal ends by itself).");
    }

    private static async Task<Results<NoContent, ProblemHttpResult>> AnnounceAsync(string bench, AnnounceRequest request, Desks desks)
    {
        if (desks.Find(bench) is not { } desk)
        {
            return Desks.Missing(bench);
        }

        // A missing kind must not pass for the first of the kinds: that would make the watch forget its level.
        if (AnnouncementWords.KindOf(request.Kind) is not { } kind)
        {
            return Problems.Bad($"kind is '{request.Kind}'; expected one of {AnnouncementWords.Names}.");
        }

        var detail = request.Detail?.Trim() ?? "";
        if (detail.Length > LongestDetail)
        {
            return Problems.Bad($"detail has {detail.Length} characters; expected at most {LongestDetail}.");
        }

        var announcement = new Announcement(kind, detail.Length == 0 ? null : detail);
        return desk.Soak is { } soak && await soak.AnnounceAsync(announcement) ? TypedResults.NoContent() : NoRun(bench);
    }

    private static Task<Results<NoContent, ProblemHttpResult>> NextAsync(string bench, Desks desks) => BringUpAsync(bench, desks, leave: false);

    private static Task<Results<NoContent, ProblemHttpResult>> LeaveAsync(string bench, Desks desks) => BringUpAsync(bench, desks, leave: true);

    private static async Task<Results<NoContent, ProblemHttpResult>> BringUpAsync(string bench, Desks desks, bool leave)
    {
        if (desks.Find(bench) is not { } desk)
        {
            return Desks.Missing(bench);
        }

        return desk.Soak is { } soak && await soak.AdvanceBringUpAsync(leave)
            ? TypedResults.NoContent()
            : Problems.Of(StatusCodes.Status409Conflict, "No such step", $"{bench} is not being brought up, or its last lamp is in.");
    }

    private static async Task<Results<NoContent, ProblemHttpResult>> NoteAsync(string bench, NoteRequest request, LiveBoard board, SoakStore store, CancellationToken cancellation)
    {
        if (board.Bench(bench) is not { } document)
        {
            return Desks.Missing(bench);
        }

        if (document.Run is null)
        {
            return NoRun(bench);
        }

        var text = request.Text?.Trim() ?? "";
        if (text.Length is 0 or > LongestNote)
        {
            return Problems.Bad($"text has {text.Length} characters; expected 1 to {LongestNote}.");
        }

        await store.AddNoteAsync(document.Run, text, request.Author, document.Seconds, cancellation);
        return TypedResults.NoContent();
    }

    internal static ProblemHttpResult NoRun(string bench) =>
        Problems.Of(StatusCodes.Status409Conflict, "No run", $"{bench} has no run under way.");
}
