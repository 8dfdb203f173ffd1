using Lampwarden.Analysis.Lamps;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Recording.Forwarding;
using Lampwarden.Host.Unattended;
using Lampwarden.Host.Web;
using Lampwarden.Host.Web.Live;
using Microsoft.Extensions.Hosting.WindowsServices;
using Serilog;
using Serilog.Events;

namespace Lampwarden.Host.Soaking;

/// <summary>The service as a whole: one hosted soak a bench over one store, until all are done or somebody stops it.</summary>
public static class SoakHost
{
    /// <summary>Runs the benches.</summary>
    /// <param name="plans">At least one.</param>
    /// <param name="recordFolder">Where the store and the log lie; made if missing.</param>
    /// <param name="time">The clock of polls and time stamps.</param>
    /// <param name="listeners">Who looks on.</param>
    /// <param name="logToConsole">Whether the log also goes to standard error.</param>
    /// <param name="started">Called once every soak is on its way; null for nothing.</param>
    /// <param name="page">Serves the page; null for none.</param>
    /// <param name="attended">How people are told, and who notices when the service dies; null for the log alone.</param>
    /// <param name="stop">Ends every soak; the runs are still closed and stored.</param>
    /// <param name="influx">A server to forward to; null for none.</param>
    /// <returns>What came of each run that began.</returns>
    /// <exception cref="StoreException">The store cannot be opened or written.</exception>
    public static async Task<IReadOnlyList<SoakDocument>> RunAsync(
        IReadOnlyList<BenchPlan> plans,
        string recordFolder,
        TimeProvider time,
        IReadOnlyList<ISoakListener> listeners,
        bool logToConsole,
        Action? started,
        PageOrder? page,
        AttendanceOrder? attended,
        CancellationToken stop,
        InfluxOptions? influx = null)
    {
        using var store = SoakStore.Open(recordFolder, time);
        using var forwarder = influx is null ? null : new InfluxForwarder(store, influx, TimeProvider.System);
        using var log = new Serilog.Extensions.Logging.SerilogLoggerFactory(MakeLog(recordFolder, logToConsole), dispose: true);
        var logger = log.CreateLogger("Lampwarden");
        await using var attendance = attended is null ? null : new Attendance(attended, [.. plans.Select(plan => plan.Name)], recordFolder, () => store.Health, forwarder is null ? null : () => forwarder.Health, logger);
        var listenersAndOurs = (IReadOnlyList<ISoakListener>)[.. attendance?.Listeners ?? [], .. listeners];
        await using var board = page is null ? null : new LiveBoard(plans);
        var builder = Microsoft.Extensions.Hosting.Host.CreateEmptyApplicationBuilder(new HostApplicationBuilderSettings { ContentRootPath = AppContext.BaseDirectory });
        builder.Services.AddSingleton<ILoggerFactory>(log);
        builder.Services.Configure<HostOptions>(options => options.ShutdownTimeout = TimeSpan.FromSeconds(15));
        builder.Services.AddSingleton<IHostLifetime, CommandLifetime>();
        if (WindowsServiceHelpers.IsWindowsService())
        {
            // There the service manager, not the command line, says when to stop.
            builder.Services.AddWindowsService(options => options.ServiceName = "Lampwarden");
        }

        builder.Services.AddSingleton(services => new SoakResults(plans.Count, services.GetRequiredService<IHostApplicationLifetime>().StopApplication));
        builder.Services.AddSingleton(new SoakSurroundings(
            time,
            logger,
            attendance is null ? [new LogRoute(logger)] : [new LogRoute(logger), attendance.Dispatch],
            board is null ? listenersAndOurs : [.. listenersAndOurs, board],
            attendance?.Rules));
        builder.Services.AddSingleton(services => plans.Select(plan => new BenchDesk(
            plan, Inventory.Of(plan.Options.Inventory), store, services.GetRequiredService<SoakSurroundings>(), page?.StaysOpen ?? false, attended?.ResumeWithin)).ToList());
        for (var index = 0; index < plans.Count; index++)
        {
            var place = index;
            builder.Services.AddSingleton<IHostedService>(services => new BenchSoakService(
                services.GetRequiredService<List<BenchDesk>>()[place],
                services.GetRequiredService<SoakSurroundings>().Logger,
                services.GetRequiredService<SoakResults>()));
        }

        if (forwarder is not null)
        {
            builder.Services.AddSingleton(forwarder);
            builder.Services.AddHostedService<InfluxService>();
        }

        using var host = builder.Build();
        foreach (var run in store.Interrupted)
        {
            Log.RunInterrupted(logger, run.Bench, run.Run, run.LengthSeconds);
        }

        await using var served = page is null ? null : await page.OpenAsync(
            new PageParts(board!, host.Services.GetRequiredService<List<BenchDesk>>(), store, log, attendance));
        await host.StartAsync(CancellationToken.None);
        attendance?.Ready(plans.Count);
        started?.Invoke();
        var results = host.Services.GetRequiredService<SoakResults>();
        await using var stopping = stop.Register(() => attendance?.Stopping());
        await host.WaitForShutdownAsync(stop);
        return results.Fault is { } fault ? throw new IOException($"A soak ended by a fault: {fault.Message}", fault) : results.Documents;
    }

    private static Serilog.Core.Logger MakeLog(string recordFolder, bool logToConsole)
    {
        var log = new LoggerConfiguration()
            .MinimumLevel.Information()
            .MinimumLevel.Override("Microsoft", LogEventLevel.Warning)
            .WriteTo.File(
                new Serilog.Formatting.Compact.CompactJsonFormatter(),
                Path.Combine(recordFolder, "log", "lampwarden-.jsonl"),
                rollingInterval: RollingInterval.Day,
                retainedFileCountLimit: 31);
        if (logToConsole)
        {
            log.WriteTo.Console(
                standardErrorFromLevel: LogEventLevel.Verbose,
                formatProvider: System.Globalization.CultureInfo.InvariantCulture,
                outputTemplate: "{Timestamp:HH:mm:ss} {Level:u3} {Message:lj}{NewLine}{Exception}");
        }

        return log.CreateLogger();
    }

    /// <summary>Signals are the command line's business: it cancels the token that this host waits on.</summary>
    private sealed class CommandLifetime : IHostLifetime
    {
        public Task WaitForStartAsync(CancellationToken cancellationToken) => Task.CompletedTask;

        public Task StopAsync(CancellationToken cancellationToken) => Task.CompletedTask;
    }
}
