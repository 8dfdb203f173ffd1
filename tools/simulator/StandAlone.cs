using System.Globalization;
using Lampwarden.Simulator.Benches;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Simulator;

/// <summary>The simulator as a program of its own: a bench on wires that any program may open.</summary>
public static class StandAlone
{
    private const string Usage = """
        Usage: simulator --scenario F (--pty | --tcp PORT) [--speed X]
          --scenario F   a scenario file, such as config/scenarios/quiet-night.json
          --pty          pseudo-terminals; prints the path of each
          --tcp PORT     TCP on loopback, a second meter on the next port; 0 takes free ones
          --speed X      how many times faster than life, 0.1 to 1000 (default 1)
        """;

    /// <summary>Runs until the scenario ends or it is told to stop.</summary>
    /// <param name="args">The command line.</param>
    /// <param name="output">Gets one line a meter: name, kind of wire, place.</param>
    /// <param name="error">Gets what went wrong.</param>
    /// <param name="stop">Ends it early.</param>
    /// <returns>0 done, 2 bad input, 3 no port to be had.</returns>
    public static async Task<int> RunAsync(string[] args, TextWriter output, TextWriter error, CancellationToken stop)
    {
        try
        {
            var (scenario, makePort, speed) = Read(args);
            using var fast = speed == 1 ? null : new RehearsalClock(speed);
            await using var rig = new SimulatedRig(scenario, fast ?? TimeProvider.System, makePort);
            foreach (var meter in rig.Meters)
            {
                await output.WriteLineAsync($"{meter.Name} {meter.TransportKind} {meter.Place}");
            }

            await output.FlushAsync(stop);
            fast?.Begin();
            await Task.Delay(TimeSpan.FromSeconds(scenario.EndSeconds), fast ?? TimeProvider.System, stop);
            return 0;
        }
        catch (OperationCanceledException) when (stop.IsCancellationRequested)
        {
            return 0;
        }
        catch (FormatException fault)
        {
            await error.WriteLineAsync(fault.Message);
            return 2;
        }
        catch (Exception fault) when (fault is IOException or System.Net.Sockets.SocketException)
        {
            await error.WriteLineAsync(fault.Message);
            return 3;
        }
    }

    private static (Scenario Scenario, Func<IInstrumentPort> MakePort, double Speed) Read(string[] args)
    {
        Scenario? scenario = null;
        Func<IInstrumentPort>? makePort = null;
        var speed = 1.0;
        for (var at = 0; at < args.Length; at++)
        {
            switch (args[at])
            {
                case "--scenario" when at + 1 < args.Length:
                    scenario = ScenarioFile.Load(args[++at]);
                    break;
                case "--pty":
                    makePort = () => new PseudoTerminal();
                    break;
                case "--tcp" when at + 1 < args.Length && ushort.TryParse(args[at + 1], NumberStyles.None, CultureInfo.InvariantCulture, out var port):
                    at++;
                    var next = (int)port;
                    makePort = () => new TcpInstrumentPort(next == 0 ? 0 : next++);
                    break;
                case "--speed" when at + 1 < args.Length
                    && double.TryParse(args[at + 1], NumberStyles.Float, CultureInfo.InvariantCulture, out speed) && speed is >= 0.1 and <= 1000:
                    at++;
                    break;
                default:
                    throw new FormatException($"'{args[at]}' is not understood here.\n{Usage}");
            }
        }

        return scenario is not null && makePort is not null
            ? (scenario, makePort, speed)
            : throw new FormatException($"A scenario and a wire must be given.\n{Usage}");
    }
}
