using Lampwarden.Acquisition.Transport;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>
/// Asks a SCPI meter at a fixed rate: one question outstanding, one event for every poll.
/// SCPI answers carry no number of their question. After anything unexpected the two sides are therefore taken to be out of step,
/// and no number is believed until the meter has answered *IDN? (see <see cref="ResynchroniseAsync"/>).
/// </summary>
internal sealed partial class ScpiMeter : IMeterProtocol
{
    private const double StalledSeconds = 1;
    private const double StalledPeriods = 3;
    private readonly MeterOptions _options;
    private readonly EventOutlet _outlet;
    private readonly TimeSpan _patience;
    private bool _outOfStep;
    private int _failedSteps;

    public ScpiMeter(MeterOptions options, EventOutlet outlet)
    {
        _options = options;
        _outlet = outlet;
        _patience = TimeSpan.FromSeconds(options.ReplyTimeoutSeconds);
    }

    private HealthBook Health => _outlet.Health;

    /// <inheritdoc/>
    public async Task RunAsync(Wire wire, CancellationToken cancellationToken)
    {
        using var over = CancellationTokenSource.CreateLinkedTokenSource(cancellationToken);
        using var dialogue = new ScpiDialogue(wire, Health, _patience);
        var pump = PumpAsync(wire, dialogue, over);
        try
        {
            await PrepareAsync(dialogue, over.Token);
            await PollForEverAsync(dialogue, over.Token);
        }
        catch (OperationCanceledException) when (!cancellationToken.IsCancellationRequested)
        {
            // The pump stopped us because the wire is gone; its exception says how, below.
        }
        finally
        {
            dialogue.RefuseUnasked();
            await over.CancelAsync();
            await pump.ConfigureAwait(ConfigureAwaitOptions.SuppressThrowing);
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
        var schedule = new PollSchedule(_outlet.Clock.Time, _options.ReadingsPerSecond);
        while (true)
        {
            var late = await schedule.WaitAsync(cancellationToken);
            Health.Skipped(schedule.SkippedByWork);
            if (late > Math.Max(StalledSeconds, StalledPeriods * schedule.PeriodSeconds))
            {
                _outlet.Gap(GapReason.Stalled, FormattableString.Invariant(
                    $"this program was held up for {late:0.0} s and left out {Math.Floor(late / schedule.PeriodSeconds):0} polls; the computer is too busy or slept"));
            }

            await PollAsync(dialogue, cancellationToken);
            await _outlet.FlushAsync(cancellationToken);
        }
    }

    private async Task PollAsync(ScpiDialogue dialogue, CancellationToken cancellationToken)
    {
        if (_outOfStep && !await ResynchroniseAsync(dialogue, cancellationToken))
        {
            return; // its gap is given
        }

        dialogue.RefuseUnasked();
        var asked = _outlet.Clock.Now;
        await dialogue.SendAsync(_options.Protocol.Query, cancellationToken);
        if (await dialogue.NextAsync(cancellationToken) is not { } answer)
        {
            NoAnswer(dialogue, _options.Protocol.Query);
            return;
        }

        var value = ScpiNumber.Read(answer.Bytes);
        if (value.Kind == MeterEventKind.Gap)
        {
            Health.LineRefused(value.Reason);
            _outOfStep = value.Reason == GapReason.NotANumber; // it may be the answer to something else
            _outlet.Gap(value.Reason, $"asked {_options.Protocol.Query}: {value.Detail}");
            return;
        }

        Health.LineUsed();
        _outlet.Value(value, answer.FirstByteStamp, _outlet.Clock.Seconds(asked, answer.LastByteStamp));
    }

    private void NoAnswer(ScpiDialogue dialogue, string question)
    {
        _outOfStep = true;
        var unfinished = dialogue.UnfinishedBytes;
        dialogue.DropUnfinished();
        if (unfinished > 0)
        {
            _outlet.Gap(GapReason.NotANumber, FormattableString.Invariant(
                $"asked {question}: {unfinished} bytes came and no line end within {_options.ReplyTimeoutSeconds} s; wrong baud rate, or the answer broke off"));
        }
        else
        {
            _outlet.Gap(GapReason.NoAnswer, FormattableString.Invariant(
                $"asked {question}: nothing came within {_options.ReplyTimeoutSeconds} s; meter off, cable loose, or another language"));
        }
    }
}
