using Lampwarden.Acquisition.Transport;

namespace Lampwarden.Acquisition;

/// <summary>
/// The wires open in this process. Two meters of the configuration with the same transport, say one instrument that measures line current
/// and mains voltage, share one wire, since a port can be opened once only. Thread-safe.
/// </summary>
internal static class MeterLines
{
    private static readonly Lock Gate = new();
    private static readonly Dictionary<string, MeterLine> Shared = [];
    private static readonly Dictionary<string, Task> Closing = [];

    /// <summary>Puts a station on its wire, opening it if need be.</summary>
    /// <returns>Takes it off again; the last one off waits for the wire to be closed.</returns>
    public static async Task<Func<Task>> AttachAsync(Station station, TimeProvider time, IMeterTransport? own)
    {
        if (own is not null)
        {
            var line = new MeterLine(own, time);
            line.Add(station);
            return async () => await line.DisposeAsync();
        }

        var options = station.Options.Transport;
        var place = options.Kind == "tcp" ? $"tcp {options.Host}:{options.Port}" : $"serial {options.Port}";
        while (true)
        {
            Task closing;
            lock (Gate)
            {
                if (!Closing.TryGetValue(place, out closing!))
                {
                    if (!Shared.TryGetValue(place, out var line))
                    {
                        line = Shared[place] = new MeterLine(options.Kind == "tcp" ? new TcpTransport(options) : new SerialTransport(options), time);
                    }

                    line.Add(station);
                    return () => DetachAsync(place, line, station);
                }
            }

            await closing.ConfigureAwait(ConfigureAwaitOptions.SuppressThrowing);
        }
    }

    private static async Task DetachAsync(string place, MeterLine line, Station station)
    {
        var closed = new TaskCompletionSource(TaskCreationOptions.RunContinuationsAsynchronously);
        lock (Gate)
        {
            if (!line.Remove(station))
            {
                station.Outlet.Complete(null);
                return;
            }

            Shared.Remove(place);
            Closing[place] = closed.Task;
        }

        try
        {
            await line.DisposeAsync();
        }
        finally
        {
            lock (Gate)
            {
                Closing.Remove(place);
            }

            closed.SetResult();
            station.Outlet.Complete(null);
        }
    }
}
