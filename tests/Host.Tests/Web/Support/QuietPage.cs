using Lampwarden.Acquisition;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Unattended;
using Lampwarden.Host.Web;
using Lampwarden.Host.Web.Access;
using Lampwarden.Host.Web.Live;
using Microsoft.Extensions.Logging.Abstractions;

namespace Lampwarden.Host.Tests.Web.Support;

/// <summary>The page over benches that do nothing by themselves: a test tells the board what happens.</summary>
internal sealed class QuietPage : IAsyncDisposable
{
    private readonly DirectoryInfo _folder = Directory.CreateTempSubdirectory("lampwarden-page-");
    private PageServer? _server;
    private Attendance? _attendance;

    private QuietPage(IReadOnlyList<BenchPlan> plans)
    {
        Plans = plans;
        Store = SoakStore.Open(_folder.FullName, TimeProvider.System);
        // No loop runs here, so none can be stuck.
        Board = new LiveBoard(plans, stuckSeconds: double.PositiveInfinity);
    }

    public IReadOnlyList<BenchPlan> Plans { get; }

    public SoakStore Store { get; }

    public LiveBoard Board { get; }

    /// <summary>Without cookies, so that a test sends what it means to send.</summary>
    public HttpClient Client { get; private set; } = null!;

    public Uri Url { get; private set; } = null!;

    public static Task<QuietPage> OpenAsync(WebOptions? web = null, TimeProvider? time = null) => OpenAsync(web, time, "attic");

    public static Task<QuietPage> OpenAsync(WebOptions? web, TimeProvider? time, params string[] benches) => OpenAsync(web, time, null, benches);

    /// <summary>With people to tell and contactors to open.</summary>
    public static Task<QuietPage> OpenAsync(AlertsOptions alerts) => OpenAsync(null, null, alerts, ["attic"]);

    private static async Task<QuietPage> OpenAsync(WebOptions? web, TimeProvider? time, AlertsOptions? alerts, string[] benches)
    {
        var page = new QuietPage([.. benches.Select(name => BenchPlan.From(Bench(name), LampInventory.Empty))]);
        var options = web ?? new WebOptions();
        var address = PageAddress.Of(new WebOptions { Address = AnyPort(options.Address), TokenFile = options.TokenFile }, "test");
        var around = new SoakSurroundings(TimeProvider.System, NullLogger.Instance, [], [page.Board]);
        var desks = page.Plans.Select(plan => new BenchDesk(plan, LampInventory.Empty, page.Store, around, staysOpen: true)).ToList();
        page._attendance = alerts is null ? null : new Attendance(
            new AttendanceOrder(new LampwardenOptions { Alerts = alerts }), benches, page._folder.FullName, () => page.Store.Health, null, NullLogger.Instance);
        page._server = await PageServer.StartAsync(address, LampInventory.Empty, new PageParts(page.Board, desks, page.Store, NullLoggerFactory.Instance, page._attendance), time);
        page.Url = new Uri(page._server.Url.Replace("0.0.0.0", "127.0.0.1", StringComparison.Ordinal));
        page.Client = new HttpClient(new SocketsHttpHandler { UseCookies = false }) { BaseAddress = page.Url };
        return page;
    }

    /// <summary>A bench of ours: 60 W lamp, a resistor behind it.</summary>
    public static BenchOptions Bench(string name, string bank = "60 W 120 V || 25 W 120 V", string unit = "resistor 300 ohm") => new()
    {
        Name = name,
        Mains = "120 V 60 Hz",
        Bank = bank,
        Unit = unit,
        Meters = [new MeterOptions { Name = "line", Transport = new TransportOptions { Kind = "tcp", Host = "127.0.0.1", Port = "1" } }],
    };

    /// <summary>A route that works, one that does not, and a cut-off that opens nothing.</summary>
    public static AlertsOptions TwoRoutes()
    {
        var alerts = new AlertsOptions { Instance = "loft", CutOff = new CutOffOptions { DryRun = true } };
        alerts.CutOff.Trips.Add("hard-short");
        alerts.CutOff.Outputs.Add(new CutOffOutputOptions { Bench = "attic", OpenText = "OPEN\\n" });
        alerts.Routes.Add(new AlertRouteOptions { Kind = "command", Name = "works", Command = new RunOptions { Program = "/bin/true" } });
        alerts.Routes.Add(new AlertRouteOptions { Kind = "command", Name = "breaks", Command = new RunOptions { Program = "/bin/false" } });
        return alerts;
    }

    public Task StopAsync() => _server!.DisposeAsync().AsTask();

    public async ValueTask DisposeAsync()
    {
        Client.Dispose();
        await _server!.DisposeAsync();
        if (_attendance is not null)
        {
            await _attendance.DisposeAsync();
        }

        await Board.DisposeAsync();
        Store.Dispose();
        _folder.Delete(recursive: true);
    }

    private static string AnyPort(string address) => new UriBuilder(address) { Port = 0 }.Uri.GetLeftPart(UriPartial.Authority);
}
