using System.Globalization;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>
/// Listens to a meter that talks by itself, for one station or several. Every line gives one event, and so does every interval in which
/// none came. The first line after opening is refused: we may have come in at its middle, and 0.412 would read as 412.
/// </summary>
internal sealed class LineMeter : IMeterProtocol, ILineSink
{
    private const double SilentPeriods = 3;
    private readonly MeterLine _line;
    private bool _first = true;
    private long _lines;

    public LineMeter(MeterLine line) => _line = line;

    /// <inheritdoc/>
    public async Task RunAsync(Wire wire, CancellationToken cancellationToken)
    {
        if (_line.Stations is not [var first, ..])
        {
            return;
        }

        foreach (var command in _line.Stations.SelectMany(station => station.Options.Protocol.SetUp).Distinct())
        {
            await wire.SendAsync(System.Text.Encoding.Latin1.GetBytes(command + first.Options.Protocol.CommandEndText), cancellationToken);
        }

        using var over = CancellationTokenSource.CreateLinkedTokenSource(cancellationToken);
        var silence = WatchSilenceAsync(wire, first, over.Token);
        try
        {
            await wire.PumpAsync(this, over.Token);
        }
        finally
        {
            await over.CancelAsync();
            await silence.ConfigureAwait(ConfigureAwaitOptions.SuppressThrowing);
        }
    }

    /// <inheritdoc/>
    public void OnLine(ReadOnlySpan<byte> line, long firstByteStamp, long lastByteStamp, bool stale)
    {
        Interlocked.Increment(ref _lines);
        var stations = _line.Stations;
        foreach (var station in stations)
        {
            if (_first || stale)
            {
                station.Health.LineReceivedAndRefused(stale ? GapReason.StaleAnswer : GapReason.NotANumber);
                continue;
            }

            var notForUs = false;
            var value = station.Reader is LinePattern pattern ? pattern.Read(line, out notForUs) : station.Reader.Read(line);
            if (notForUs && (stations.Length > 1 || station.Options.Protocol.Ignore.Length > 0))
            {
                station.Health.LineReceived();
                station.Health.LinePassedOver();
            }
            else if (value.Kind == MeterEventKind.Gap)
            {
                station.Health.LineReceivedAndRefused(value.Reason);
                station.Outlet.Gap(value.Reason, value.Detail!);
            }
            else
            {
                station.Outlet.Value(value, firstByteStamp, station.Outlet.Clock.Seconds(firstByteStamp, lastByteStamp), countLine: true);
            }
        }

        _first = false;
    }

    /// <inheritdoc/>
    public void OnLineTooLong(long stamp)
    {
        Interlocked.Increment(ref _lines);
        _first = false; // its end has been seen, so the next line is whole
        foreach (var station in _line.Stations)
        {
            station.Health.LineReceived();
            station.Health.LineRefused(GapReason.LineTooLong);
            station.Health.Problem(Wire.TooLong);
            station.Outlet.Gap(GapReason.LineTooLong, Wire.TooLong);
        }
    }

    /// <inheritdoc/>
    public async ValueTask RoomAsync(CancellationToken cancellationToken)
    {
        foreach (var station in _line.Stations)
        {
            await station.Outlet.FlushAsync(cancellationToken);
        }
    }

    // The pace is the meter's, on the clock of the session; on top comes the patience in real time, as with questions.
    private async Task WatchSilenceAsync(Wire wire, Station first, CancellationToken cancellationToken)
    {
        var pace = TimeSpan.FromSeconds(SilentPeriods / first.Options.ReadingsPerSecond);
        var patience = TimeSpan.FromSeconds(first.Options.ReplyTimeoutSeconds);
        while (true)
        {
            var before = Interlocked.Read(ref _lines);
            await Task.Delay(pace, first.Outlet.Clock.Time, cancellationToken);
            await Task.Delay(patience, TimeProvider.System, cancellationToken);
            if (Interlocked.Read(ref _lines) != before)
            {
                continue;
            }

            var unfinished = wire.UnfinishedBytes;
            foreach (var station in _line.Stations)
            {
                station.Outlet.Gap(unfinished > 0 ? GapReason.NotANumber : GapReason.NoAnswer, unfinished > 0
                    ? string.Create(CultureInfo.InvariantCulture, $"{unfinished} bytes came and no line end; wrong baud rate, or another protocol.lineEnd")
                    : "the meter sends nothing; off, cable loose, or its sending is switched off");
                await station.Outlet.FlushAsync(cancellationToken);
            }
        }
    }
}
