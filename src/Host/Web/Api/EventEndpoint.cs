using System.ComponentModel;
using System.Text.Json;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Web.Live;

namespace Lampwarden.Host.Web.Api;

/// <summary>
/// The event stream (text/event-stream of the HTML standard). Begins with <c>reset</c>, which holds everything, unless it
/// resumes from an id that is still kept; then it begins with what came after that.
/// </summary>
internal static class EventEndpoint
{
    // A browser notices a dead host by what it no longer hears.
    private static readonly TimeSpan Heartbeat = TimeSpan.FromSeconds(2);

    public static void Map(IEndpointRouteBuilder api) => api.MapGet("/events", StreamAsync)
        .WithTags("Events")
        .WithSummary("What happens, as it happens: server-sent events reset, bench, now, readings and heartbeat")
        .Produces(StatusCodes.Status200OK, contentType: "text/event-stream");

    private static async Task StreamAsync(
        HttpContext context,
        LiveBoard board,
        IHostApplicationLifetime lifetime,
        [Description("Readings of this bench are sent; of none where it is left out")] string? bench = null,
        [Description("Id of the last event heard; the header Last-Event-ID goes before it")] string? after = null)
    {
        var response = context.Response;
        response.ContentType = "text/event-stream";
        response.Headers["X-Accel-Buffering"] = "no";
        using var gone = CancellationTokenSource.CreateLinkedTokenSource(context.RequestAborted, lifetime.ApplicationStopping);
        var lastId = context.Request.Headers["Last-Event-ID"].FirstOrDefault() ?? after;
        var at = board.Log.TryNumber(lastId, out var number) ? number : -1;
        var now = 0L;
        try
        {
            // Without this the browser waits for a first byte before it calls the stream open.
            await response.Body.WriteAsync("retry: 1000\n\n"u8.ToArray(), gone.Token);
            while (true)
            {
                var changed = board.Log.Changed;
                (at, now) = await SendAsync(response, board, bench, at, now, gone.Token);
                await response.Body.FlushAsync(gone.Token);
                if (!await WokenAsync(changed, gone.Token))
                {
                    await response.Body.WriteAsync(EventLog.Frame("heartbeat", null, "{}"u8), gone.Token);
                }
            }
        }
        catch (OperationCanceledException) when (gone.IsCancellationRequested)
        {
            // The reader left, or the service ends: then it is still told what came last, the end of its run above all.
            if (!context.RequestAborted.IsCancellationRequested)
            {
                await SendAsync(response, board, bench, at, now, context.RequestAborted);
            }
        }
        catch (IOException)
        {
            // The reader's connection broke.
        }
    }

    private static async Task<bool> WokenAsync(Task changed, CancellationToken stop)
    {
        try
        {
            await changed.WaitAsync(Heartbeat, stop);
            return true;
        }
        catch (TimeoutException)
        {
            return false;
        }
    }

    private static async Task<(long At, long Now)> SendAsync(HttpResponse response, LiveBoard board, string? bench, long at, long now, CancellationToken stop)
    {
        var log = board.Log;
        if (log.After(at) is not { } events)
        {
            // New here, from another process's time, or too slow: everything anew.
            var (document, number) = board.Everything();
            await response.Body.WriteAsync(EventLog.Frame("reset", log.IdOf(number), JsonSerializer.SerializeToUtf8Bytes(document, Json.Compact)), stop);
            return (number, now);
        }

        foreach (var happened in events)
        {
            at = happened.Number;
            if (happened.Type != "readings" || happened.Bench == bench)
            {
                await response.Body.WriteAsync(EventLog.Frame(happened.Type, log.IdOf(at), happened.Json), stop);
            }
        }

        foreach (var newer in board.NowAfter(now))
        {
            now = Math.Max(now, newer.Version);
            await response.Body.WriteAsync(EventLog.Frame("now", null, newer.Json), stop);
        }

        return (at, now);
    }
}
