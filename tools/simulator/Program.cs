using System.Globalization;
using System.Runtime.InteropServices;
using Lampwarden.Simulator;

CultureInfo.DefaultThreadCurrentCulture = CultureInfo.CurrentCulture = CultureInfo.InvariantCulture;
using var stop = new CancellationTokenSource();
using var interrupt = PosixSignalRegistration.Create(PosixSignal.SIGINT, End);
using var terminate = PosixSignalRegistration.Create(PosixSignal.SIGTERM, End);
return await StandAlone.RunAsync(args, Console.Out, Console.Error, stop.Token);

void End(PosixSignalContext signal)
{
    signal.Cancel = true; // the links to the terminals are taken away first
    stop.Cancel();
}
