using System.Globalization;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Unattended;

namespace Lampwarden.CrashChild;

/// <summary>The real service, but for a listener that never comes back after so many readings: a loop that hangs.</summary>
internal sealed class HangingService(int readings) : ISoakListener
{
    private int _seen;

    public void Hear(SoakEvent happened)
    {
        if (happened is Observed && ++_seen == readings)
        {
            Console.Error.WriteLine("the loop hangs now");
            Thread.Sleep(Timeout.Infinite);
        }
    }

    public static async Task RunAsync(string config, string folder, string readings)
    {
        var options = ConfigurationFile.Load(config);
        var inventory = Inventory.Of(options.Lamps);
        var hanging = new HangingService(int.Parse(readings, CultureInfo.InvariantCulture));
        await SoakHost.RunAsync(
            [.. options.Benches.Select(bench => BenchPlan.From(bench, inventory))], folder, TimeProvider.System, [hanging], logToConsole: true,
            started: null, page: null, new AttendanceOrder(options), CancellationToken.None);
    }
}
