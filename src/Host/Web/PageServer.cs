using Lampwarden.Analysis.Lamps;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Web.Access;
using Lampwarden.Host.Web.Api;
using Lampwarden.Host.Web.Files;
using Lampwarden.Host.Unattended;
using Lampwarden.Host.Web.Live;
using Microsoft.AspNetCore.Hosting;

namespace Lampwarden.Host.Web;

/// <summary>Serves the page and its HTTP interface, apart from the soaks: nothing a request does can hold them back.</summary>
public sealed class PageServer : IAsyncDisposable
{
    // The largest thing anybody sends is a note.
    private const long LargestBodyBytes = 64 << 10;

    private readonly WebApplication _application;
    private readonly LiveBoard _board;

    private PageServer(WebApplication application, LiveBoard board) => (_application, _board) = (application, board);

    /// <summary>Where it listens: the port that was given to it where 0 was asked for.</summary>
    public string Url => _application.Urls.First();

    /// <summary>Begins to listen.</summary>
    /// <exception cref="IOException">The address cannot be had.</exception>
    public static async Task<PageServer> StartAsync(PageAddress address, LampInventory inventory, PageParts parts, TimeProvider? time = null)
    {
        var builder = WebApplication.CreateEmptyBuilder(new WebApplicationOptions { ContentRootPath = AppContext.BaseDirectory });
        builder.WebHost.UseKestrel(options =>
        {
            options.AddServerHeader = false;
            options.Limits.MaxRequestBodySize = LargestBodyBytes;
            options.Limits.MaxConcurrentConnections = 500;
        });
        builder.WebHost.UseUrls(address.Url.ToString());
        builder.Services.AddSingleton<IHostLifetime, NoSignals>();
        builder.Services.AddSingleton(parts.Loggers);
        builder.Services.AddRouting();
        builder.Services.AddProblemDetails();
        builder.Services.ConfigureHttpJsonOptions(options => CopyTo(options.SerializerOptions));
        builder.Services.AddOpenApi(OpenApiText.Configure);
        builder.Services.AddSingleton(parts.Board).AddSingleton(parts.Store).AddSingleton(inventory).AddSingleton(new Desks(parts.Desks))
            .AddSingleton(new Watcher(parts.Attendance?.Dispatch, parts.Attendance?.Health));
        builder.Services.AddSingleton(new AccessRules(address, new WrongTokens(time ?? TimeProvider.System), time ?? TimeProvider.System));
        builder.Services.Configure<HostOptions>(options => options.ShutdownTimeout = TimeSpan.FromSeconds(5));
        var application = builder.Build();
        application.Use(next => context => SecurityHeaders.SetAsync(context, next));
        application.UseExceptionHandler(handler => handler.Run(Problems.AnswerAsync));
        application.UseStatusCodePages();
        application.Use(next => context => context.RequestServices.GetRequiredService<AccessRules>().CheckAsync(context, next));
        application.Use(next => context => PageFiles.ServeAsync(context, next));
        application.UseRouting();
        application.MapOpenApi("/api/openapi.json");
        Map(application);
        if (parts.Attendance is { } attendance)
        {
            application.MapHealth(attendance.Health, attendance.Metrics);
        }

        await application.StartAsync();
        parts.Board.Start();
        return new PageServer(application, parts.Board);
    }

    /// <summary>Sends what is left, then stops.</summary>
    public async ValueTask DisposeAsync()
    {
        _board.Collect();
        await _application.StopAsync();
        await _application.DisposeAsync();
    }

    private static void Map(IEndpointRouteBuilder application)
    {
        var api = application.MapGroup("/api");
        BenchEndpoints.Map(api);
        AlertEndpoints.Map(api);
        PredictEndpoints.Map(api);
        RunEndpoints.Map(api);
        TakeAwayEndpoints.Map(api);
        MeterEndpoints.Map(api);
        WatcherEndpoints.Map(api);
        EventEndpoint.Map(api);
        SessionEndpoint.Map(api);
    }

    private static void CopyTo(System.Text.Json.JsonSerializerOptions options)
    {
        options.NumberHandling = Json.Compact.NumberHandling;
        options.Encoder = Json.Compact.Encoder;
        foreach (var converter in Json.Compact.Converters)
        {
            options.Converters.Add(converter);
        }
    }

    /// <summary>Signals are the command line's business.</summary>
    private sealed class NoSignals : IHostLifetime
    {
        public Task WaitForStartAsync(CancellationToken cancellationToken) => Task.CompletedTask;

        public Task StopAsync(CancellationToken cancellationToken) => Task.CompletedTask;
    }
}
