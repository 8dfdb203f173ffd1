using System.Globalization;
using Lampwarden.Acquisition;

namespace Lampwarden.Host.Commands.Calibrating;

/// <summary>Takes one value by meter: the median of a few readings.</summary>
internal static class MeterProbe
{
    private const int Readings = 5;
    private static readonly TimeSpan Patience = TimeSpan.FromSeconds(20);

    /// <summary>Reads a meter as the configuration has it.</summary>
    /// <param name="meter">The meter.</param>
    /// <param name="settle">How long to let it run first: a filament needs about two seconds.</param>
    /// <param name="cancellation">Gives up.</param>
    /// <exception cref="IOException">It gave no readings; the message says what it gave instead.</exception>
    public static async Task<double> ReadAsync(MeterOptions meter, TimeSpan settle, CancellationToken cancellation)
    {
        await using var session = new MeterSession(meter, TimeProvider.System);
        using var ending = CancellationTokenSource.CreateLinkedTokenSource(cancellation);
        ending.CancelAfter(settle + Patience + TimeSpan.FromSeconds(Readings / meter.ReadingsPerSecond));
        var values = new List<double>();
        var trouble = "it gave no readings";
        try
        {
            await foreach (var one in session.ReadAsync(ending.Token))
            {
                if (one.Kind != MeterEventKind.Reading)
                {
                    trouble = one.Kind == MeterEventKind.Overload ? "the value is beyond its range" : one.Detail!;
                }
                else if (one.ElapsedSeconds >= settle.TotalSeconds)
                {
                    values.Add(one.Value);
                }

                if (values.Count == Readings)
                {
                    values.Sort();
                    return values[Readings / 2];
                }
            }
        }
        catch (OperationCanceledException) when (!cancellation.IsCancellationRequested)
        {
            // Told below.
        }

        throw new IOException(string.Create(CultureInfo.InvariantCulture, $"meter '{meter.Name}' gave {values.Count} of {Readings} readings: {trouble}"));
    }

    /// <summary>The same meter asked for ohms; null where it cannot be asked, because it talks by itself.</summary>
    public static MeterOptions? AsOhmmeter(MeterOptions meter) => meter.Protocol.Kind != "scpi" || meter.Protocol.Pattern.Length > 0
        ? null
        : new MeterOptions
        {
            Name = meter.Name,
            Transport = meter.Transport,
            ReadingsPerSecond = Math.Min(meter.ReadingsPerSecond, 2),
            ReplyTimeoutSeconds = Math.Max(meter.ReplyTimeoutSeconds, 3),
            SwitchOnSeconds = 0,
            Protocol = new ProtocolOptions
            {
                Query = "MEASure:RESistance?",
                Identify = meter.Protocol.Identify,
                CommandEnd = meter.Protocol.CommandEnd,
                Field = meter.Protocol.Field,
            },
        };
}
