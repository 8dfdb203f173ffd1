// A process made to be killed: it records into the folder of its first argument and says on standard output what it has
// done, so that the one who kills it knows what must be found afterwards.
//   run ID            the run has begun
//   interrupted N     so many runs were closed by this opening
//   read N MS         reading N was appended, at MS milliseconds of the system's clock
//   told N            alert change N is on disk: anybody may be told of it now
// With the words 'hang CONFIG FOLDER READINGS' it is the service instead, and hangs after so many readings.
using System.Globalization;
using Lampwarden.CrashChild;
using Lampwarden.Host.Recording;

if (args is ["hang", var config, var folder, var readings])
{
    await HangingService.RunAsync(config, folder, readings);
    return;
}

using var store = SoakStore.Open(args[0], TimeProvider.System);
var output = Console.Out;
output.WriteLine($"interrupted {store.Interrupted.Count}");
var run = await store.BeginRunAsync(new RunStart { Bench = "kill", Unit = "resistor 50 ohm", Bank = "60 W", Mains = "120 V 60 Hz" });
output.WriteLine($"run {run.Run}");
// An alert's commit takes the readings before it along. Every other life has few alerts, so that the commit's own pace is what counts.
var alertEvery = Environment.ProcessId % 2 == 0 ? 37 : 1500;
for (var number = 0L; ; number++)
{
    run.Append(new LineReading(number / 100.0, 0.4 + (number % 1000 / 10_000.0), 4));
    output.WriteLine(string.Create(CultureInfo.InvariantCulture, $"read {number} {TimeProvider.System.GetUtcNow().ToUnixTimeMilliseconds()}"));
    if (number % alertEvery == alertEvery - 1)
    {
        run.AppendAlert(new StoredAlertChange(number / 100.0, TimeProvider.System.GetUtcNow(), $"alert-{number}", "raised", "unacknowledged"));
        if (await run.FlushAsync())
        {
            output.WriteLine($"told {number}");
        }
    }

    output.Flush();
    Thread.Sleep(2);
}
