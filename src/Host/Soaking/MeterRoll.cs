using System.Text.Json;
using System.Threading.Channels;
using Lampwarden.Acquisition;

namespace Lampwarden.Host.Soaking;

/// <summary>What a bench's meters show at one instant: one poll of the line meter, with the mains as last read.</summary>
/// <param name="ElapsedSeconds">Monotonic, from an origin all meters of the bench share.</param>
/// <param name="Utc">The same instant on the wall clock.</param>
/// <param name="LineAmps">NaN for a gap, positive infinity for an overload.</param>
/// <param name="MainsVolts">NaN where not measured, or not lately.</param>
/// <param name="AmpsDecimals">Decimal places as sent; -1 unknown.</param>
/// <param name="VoltsDecimals">Decimal places as sent; -1 unknown.</param>
/// <param name="Reason">For a gap, its written name.</param>
/// <param name="Detail">For a gap, what was seen.</param>
internal readonly record struct BenchLook(
    double ElapsedSeconds,
    DateTimeOffset Utc,
    double LineAmps,
    double MainsVolts,
    int AmpsDecimals,
    int VoltsDecimals,
    string Reason,
    string? Detail);

/// <summary>The meters of one bench: runs their sessions and joins what they say. Events are taken by the soak's loop alone.</summary>
internal sealed class MeterRoll(BenchPlan plan, SoakSurroundings around)
{
    // A mains reading older than this many polls of its meter says nothing about the current measured now.
    private const double StalePolls = 3;

    private readonly Dictionary<string, double> _goneSinceSeconds = [];
    private readonly HashSet<string> _found = [];
    private readonly HashSet<(string Meter, string Problem)> _warned = [];
    private readonly System.Collections.Concurrent.ConcurrentDictionary<string, MeterSession> _sessions = new();
    private double _mainsVolts = double.NaN;
    private double _mainsAtSeconds = double.NegativeInfinity;
    private int _mainsDecimals = -1;

    /// <summary>How the meters are doing, in the order of the configuration; none before they are opened. Safe from any thread.</summary>
    public IReadOnlyList<(MeterOptions Meter, MeterHealth Health)> Health =>
        [.. plan.Options.Meters.Where(meter => _sessions.ContainsKey(meter.Name)).Select(meter => (meter, _sessions[meter.Name].Health))];

    /// <summary>Sends every event of every meter to the loop until told to stop; opens and closes the sessions.</summary>
    public async Task PumpAsync(ChannelWriter<SoakInput> inputs, CancellationToken stop)
    {
        var origin = around.Time.GetTimestamp();
        var pumps = plan.Options.Meters.Select(meter =>
        {
            var session = new MeterSession(meter, around.Time, originStamp: origin);
            _sessions[meter.Name] = session;
            return PumpOneAsync(meter, session, inputs, stop);
        }).ToList();
        await Task.WhenAll(pumps);
    }

    /// <summary>Takes one event.</summary>
    /// <returns>True when it is a poll of the line meter, and so a look at the bench.</returns>
    public bool Take(MeterOptions meter, in MeterEvent happened, out BenchLook look)
    {
        FollowHealth(meter, happened);
        look = default;
        if (meter.Quantity == Quantity.MainsVoltage)
        {
            if (happened.Kind == MeterEventKind.Reading)
            {
                (_mainsVolts, _mainsAtSeconds, _mainsDecimals) = (happened.Value, happened.ElapsedSeconds, happened.Digits);
            }

            return false;
        }

        var amps = happened.Kind switch
        {
            MeterEventKind.Reading => happened.Value,
            MeterEventKind.Overload => double.PositiveInfinity,
            _ => double.NaN,
        };
        var fresh = happened.ElapsedSeconds - _mainsAtSeconds <= StalePolls / (plan.MainsMeter?.ReadingsPerSecond ?? 1);
        look = new BenchLook(
            happened.ElapsedSeconds,
            happened.Utc,
            amps,
            fresh ? _mainsVolts : double.NaN,
            happened.Digits,
            fresh ? _mainsDecimals : -1,
            ReasonText(happened.Reason),
            happened.Detail);
        return true;
    }

    private static string ReasonText(GapReason reason) => JsonNamingPolicy.KebabCaseLower.ConvertName(reason.ToString());

    private static async Task PumpOneAsync(MeterOptions meter, MeterSession session, ChannelWriter<SoakInput> inputs, CancellationToken stop)
    {
        try
        {
            await using (session)
            {
                await foreach (var happened in session.ReadAsync(stop))
                {
                    await inputs.WriteAsync(new SoakInput(meter, happened, null), stop);
                }
            }
        }
        catch (OperationCanceledException) when (stop.IsCancellationRequested)
        {
            // Told to stop.
        }
        catch (Exception fault)
        {
            // The loop must not wait for a meter whose session has died of a fault of ours.
            inputs.TryComplete(fault);
        }
    }

    private void FollowHealth(MeterOptions meter, in MeterEvent happened)
    {
        if (happened.Kind == MeterEventKind.Gap)
        {
            if (_goneSinceSeconds.TryAdd(meter.Name, happened.ElapsedSeconds))
            {
                Log.MeterGap(around.Logger, plan.Name, meter.Name, ReasonText(happened.Reason), happened.Detail);
                Tell(new MeterLost(plan.Name, meter.Name, ReasonText(happened.Reason), happened.Detail));
            }

            return;
        }

        if (_goneSinceSeconds.Remove(meter.Name, out var since))
        {
            Log.MeterRecovered(around.Logger, plan.Name, meter.Name, happened.ElapsedSeconds - since);
            _found.Remove(meter.Name);
        }

        if (_found.Add(meter.Name))
        {
            var health = _sessions[meter.Name].Health;
            var identity = health.Identity;
            foreach (var problem in health.Problems.Where(problem => _warned.Add((meter.Name, problem))))
            {
                Log.MeterWarning(around.Logger, plan.Name, meter.Name, problem);
            }

            if (identity is not null)
            {
                Log.MeterIdentified(around.Logger, plan.Name, meter.Name, identity);
            }

            Tell(new MeterFound(plan.Name, meter.Name, identity));
        }
    }

    private void Tell(SoakEvent happened)
    {
        foreach (var listener in around.Listeners)
        {
            listener.Hear(happened);
        }
    }
}
