using Lampwarden.Acquisition.Transport;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>
/// Asks a SCPI meter at a fixed rate, for one station or several in turn: one question outstanding, one event for every poll.
/// SCPI answers carry no number of their question. After anything unexpected the two sides are therefore taken to be out of step,
/// and no number is believed until the meter has answered *IDN? (see <see cref="ResynchroniseAsync"/>).
/// </summary>
internal sealed partial class ScpiMeter : IMeterProtocol
{
    private const double StalledSeconds = 1;
    private const double StalledPeriods = 3;
    private readonly MeterLine _line;
    private readonly TimeProvider _time;
    // A meter that speaks unasked can do so between a question and its answer: for so many polls more is listened on for so long.
    private const int GuardedPolls = 20;
    private static readonly TimeSpan ListenOn = TimeSpan.FromMilliseconds(50);
    private bool _outOfStep;
    private int _guarded;
    private int _failedSteps;
    private Answer? _inHand; // taken in and not yet counted: where the session ends in between, it is passed over

    public ScpiMeter(MeterLine line, TimeProvider time)
    {
        _line = line;
        _time = time;
    }

    /// <inheritdoc/>
    public async Task RunAsync(Wire wire, CancellationToken cancellationToken)
    {
        if (_line.Stations is not [var first, ..])
        {
            return;
        }

        using var over = CancellationTokenSource.CreateLinkedTokenSource(cancellationToken);
        using var dialogue = new ScpiDialogue(wire, first);
        var pump = PumpAsync(wire, dialogue, over);
        try
        {
            await PrepareAsync(dialogue, first, over.Token);
            await PollForEverAsync(dialogue, over.Token);
        }
        catch (OperationCanceledException) when (!cancellationToken.IsCancellationRequested)
        {
            // The pump stopped us because the wire is gone; its exception says how, below.
        }
        finally
        {
            await over.CancelAsync();
            await pump.ConfigureAwait(ConfigureAwaitOptions.SuppressThrowing);
            _inHand?.PassOver();
            dialogue.RefuseUnasked();
        }

        await pump;
    }

    private static async Task PumpAsync(Wire wire, ScpiDialogue dialogue, CancellationTokenSource over)
    {
        try
        {
            await wire.PumpAsync(dialogue, over.Token);
        }
        catch (Exception fault)
        {
            dialogue.Complete(fault);
            await over.CancelAsync();
            throw;
        }
    }

    private async Task PollForEverAsync(ScpiDialogue dialogue, CancellationToken cancellationToken)
    {
        while (_line.Stations is { Length: > 0 } stations)
        {
            var station = stations.MinBy(one => one.Schedule.SecondsToNext)!;
            while (station.Schedule.SecondsToNext is var wait && wait > 0)
            {
                // Timers count whole milliseconds and may come back a little early: ask again until the point has come. A long wait is
                // cut in pieces, so that a hurry or a new station is seen soon.
                await Task.Delay(TimeSpan.FromSeconds(Math.Clamp(wait, 0.001, 0.25)), _time, cancellationToken);
            }

            var late = station.Schedule.Begin();
            if (late > Math.Max(StalledSeconds, StalledPeriods * station.Schedule.PeriodSeconds))
            {
                station.Outlet.Gap(GapReason.Stalled, FormattableString.Invariant(
                    $"this program was held up for {late:0.0} s and left out {Math.Floor(late / station.Schedule.PeriodSeconds):0} polls; the computer is too busy or slept"));
            }

            dialogue.AskFor(station);
            await PollAsync(dialogue, station, cancellationToken);
            station.Health.Skipped(station.Schedule.End());
            await station.Outlet.FlushAsync(cancellationToken);
        }
    }

    private async Task PollAsync(ScpiDialogue dialogue, Station station, CancellationToken cancellationToken)
    {
        if (dialogue.RefuseUnasked() > 0)
        {
            Mistrust();
        }

        if (_outOfStep && !await ResynchroniseAsync(dialogue, station, cancellationToken))
        {
            return; // its gap is given
        }

        var query = station.Options.Protocol.Query;
        if (dialogue.RefuseUnasked() > 0)
        {
            Mistrust();
        }

        var asked = station.Outlet.Clock.Now;
        if (await dialogue.AskAsync(query, cancellationToken) is not { } answer)
        {
            NoAnswer(dialogue, station, query);
            return;
        }

        _inHand = answer;
        await WeighAsync(dialogue, station, query, asked, answer, cancellationToken);
        _inHand = null;
    }

    /// <summary>Takes an answer for the reading, or says why not.</summary>
    private async Task WeighAsync(ScpiDialogue dialogue, Station station, string query, long asked, Answer answer, CancellationToken cancellationToken)
    {
        if (_guarded > 0)
        {
            _guarded--;
            await Task.Delay(ListenOn, cancellationToken);
        }

        if (dialogue.IsContradicted(answer))
        {
            Mistrust();
            answer.Refuse(GapReason.StaleAnswer);
            station.Outlet.Gap(GapReason.StaleAnswer, $"asked {query}: more than one answer came, beginning with {Excerpt.Of(answer.Bytes)}");
            return;
        }

        var value = station.Reader.Read(answer.Bytes);
        if (value.Kind == MeterEventKind.Gap)
        {
            answer.Refuse(value.Reason);
            _outOfStep |= value.Reason == GapReason.NotANumber; // it may be the answer to something else
            station.Outlet.Gap(value.Reason, $"asked {query}: {value.Detail}");
            return;
        }

        // Asked after the reading and not before it: a second answer to this question could be taken for the reading.
        if (await HasRestartedAsync(dialogue, station, cancellationToken))
        {
            answer.PassOver();
            station.Outlet.Gap(GapReason.MeterRestarted, "the meter reports that it was switched on since it was set up (*ESR? bit 7); it is being set up again");
            return;
        }

        station.Health.LineUsed();
        station.Outlet.Value(value, answer.FirstByteStamp, station.Outlet.Clock.Seconds(asked, answer.LastByteStamp));
        station.Saw(value.Value);
    }

    private void Mistrust()
    {
        _outOfStep = true;
        _guarded = GuardedPolls;
    }

    private void NoAnswer(ScpiDialogue dialogue, Station station, string question)
    {
        _outOfStep = true;
        var unfinished = dialogue.UnfinishedBytes;
        dialogue.DropUnfinished();
        var patience = station.Options.ReplyTimeoutSeconds;
        if (dialogue.SawLineTooLong)
        {
            station.Outlet.Gap(GapReason.LineTooLong, $"asked {question}: {Wire.TooLong}");
        }
        else if (unfinished > 0)
        {
            station.Outlet.Gap(GapReason.NotANumber, FormattableString.Invariant(
                $"asked {question}: {unfinished} bytes came and no line end within {patience} s; wrong baud rate, or the answer broke off"));
        }
        else
        {
            station.Outlet.Gap(GapReason.NoAnswer, FormattableString.Invariant(
                $"asked {question}: nothing fitting came within {patience} s; meter off, cable loose, or another language"));
        }
    }
}
