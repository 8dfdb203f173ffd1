using System.Text;
using System.Threading.Channels;
using Lampwarden.Acquisition.Transport;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>A line that came back, with the arrival of its first and last byte, and the book that counted it.</summary>
internal readonly record struct Answer(byte[] Bytes, long FirstByteStamp, long LastByteStamp, HealthBook Health)
{
    public ReadOnlySpan<byte> Text => ScpiNumber.TrimBlanks(Bytes);

    public void PassOver() => Health.LinePassedOver();

    public void Refuse(GapReason reason) => Health.LineRefused(reason);

    public override string ToString() => Encoding.Latin1.GetString(Text);
}

/// <summary>
/// One question at a time over a wire. Lines are taken in all the time, so one that lay there before a question was asked is known to be
/// no answer to it. Owned by the task that asks; <see cref="ILineSink"/> is called by the task that reads.
/// </summary>
internal sealed class ScpiDialogue : ILineSink, IDisposable
{
    // More lines than this between two questions is babble: the newest are refused and counted.
    // The asking task goes on at once on the reading task's thread: a wake-up of another thread costs more than all of a poll's own work.
    private readonly Channel<Answer> _answers = Channel.CreateBounded<Answer>(
        new BoundedChannelOptions(64) { SingleReader = true, SingleWriter = true, AllowSynchronousContinuations = true });
    private readonly Dictionary<string, byte[]> _commands = new(StringComparer.Ordinal);
    private readonly Wire _wire;
    private CancellationTokenSource _timer = new();
    private volatile Station _asking;
    private volatile bool _sawLineTooLong;

    public ScpiDialogue(Wire wire, Station asking)
    {
        _wire = wire;
        _asking = asking;
    }

    /// <summary>Bytes of a line that has begun and not ended.</summary>
    public int UnfinishedBytes => _wire.UnfinishedBytes;

    /// <summary>A line beyond the limit came since the last command, or is still coming.</summary>
    public bool SawLineTooLong => _sawLineTooLong || _wire.InLineTooLong;

    /// <summary>For whom the next questions are asked: its patience counts, and its book.</summary>
    public void AskFor(Station station) => _asking = station;

    /// <summary>Sends a command that has no answer.</summary>
    /// <exception cref="TransportException">The wire is gone, or takes nothing.</exception>
    public async ValueTask SendAsync(string command, CancellationToken cancellationToken)
    {
        var timer = StartTimer();
        await using var stop = cancellationToken.UnsafeRegister(static source => ((CancellationTokenSource)source!).Cancel(), timer);
        await SentAsync(BeginSend(command, timer.Token), cancellationToken);
    }

    /// <summary>
    /// Asks a question: the next line that is no echo, or null after the patience is over; in real time, whatever clock the polls follow.
    /// </summary>
    /// <exception cref="TransportException">The wire is gone, or takes nothing.</exception>
    public async ValueTask<Answer?> AskAsync(string command, CancellationToken cancellationToken)
    {
        var timer = StartTimer();
        await using var stop = cancellationToken.UnsafeRegister(static source => ((CancellationTokenSource)source!).Cancel(), timer);
        // The answer is waited for while the question is still going out: one wake-up less, and it cannot come before.
        var sending = BeginSend(command, timer.Token);
        var answer = await NextAsync(timer, cancellationToken);
        if (answer is null || sending.IsFaulted)
        {
            answer?.Refuse(GapReason.StaleAnswer); // something came before the question was out
            await SentAsync(sending, cancellationToken);
        }

        return answer;
    }

    /// <summary>One more line, as with <see cref="AskAsync"/>, without a question.</summary>
    /// <exception cref="TransportException">The wire is gone.</exception>
    public async ValueTask<Answer?> NextAsync(CancellationToken cancellationToken)
    {
        var timer = StartTimer();
        await using var stop = cancellationToken.UnsafeRegister(static source => ((CancellationTokenSource)source!).Cancel(), timer);
        return await NextAsync(timer, cancellationToken);
    }

    /// <summary>Refuses what came unasked; returns how many lines that were.</summary>
    public int RefuseUnasked()
    {
        var count = 0;
        while (_answers.Reader.TryRead(out var late))
        {
            if (IsEcho(late.Text))
            {
                late.PassOver();
                continue;
            }

            late.Refuse(GapReason.StaleAnswer);
            count++;
        }

        return count;
    }

    /// <summary>
    /// Another line lies there already that says something else: two answers to one question, of which none can be believed.
    /// The same line twice is a stutter, and refused with the next question.
    /// </summary>
    public bool IsContradicted(Answer answer) => _answers.Reader.TryPeek(out var other) && !IsEcho(other.Text) && !other.Text.SequenceEqual(answer.Text);

    /// <summary>Forgets a line that began and never ended, so that the next answer is not glued to it.</summary>
    public void DropUnfinished() => _wire.DropUnfinished = true;

    /// <summary>The reading task has ended.</summary>
    public void Complete(Exception? fault) => _answers.Writer.TryComplete(fault);

    /// <inheritdoc/>
    public void Dispose() => _timer.Dispose();

    void ILineSink.OnLine(ReadOnlySpan<byte> line, long firstByteStamp, long lastByteStamp, bool stale)
    {
        var health = _asking.Health;
        health.LineReceived();
        if (!_answers.Writer.TryWrite(new Answer(line.ToArray(), firstByteStamp, lastByteStamp, health)))
        {
            health.LineRefused(GapReason.StaleAnswer);
        }
    }

    void ILineSink.OnLineTooLong(long stamp)
    {
        var health = _asking.Health;
        health.LineReceived();
        health.LineRefused(GapReason.LineTooLong);
        health.Problem(Wire.TooLong);
        _sawLineTooLong = true;
    }

    ValueTask ILineSink.RoomAsync(CancellationToken cancellationToken) => ValueTask.CompletedTask;

    // Any command of ours, not only the last: one without an answer leaves its echo to whoever reads next.
    private bool IsEcho(ReadOnlySpan<byte> text)
    {
        foreach (var command in _commands.Values)
        {
            if (text.SequenceEqual(ScpiNumber.TrimBlanks(command)))
            {
                return true;
            }
        }

        return false;
    }

    private Task BeginSend(string command, CancellationToken cancellationToken)
    {
        if (!_commands.TryGetValue(command, out var bytes))
        {
            bytes = _commands[command] = Encoding.Latin1.GetBytes(command + _asking.Options.Protocol.CommandEndText);
        }

        _sawLineTooLong = false;
        return _wire.SendAsync(bytes, cancellationToken).AsTask();
    }

    private static async Task SentAsync(Task sending, CancellationToken cancellationToken)
    {
        try
        {
            await sending;
        }
        catch (OperationCanceledException) when (!cancellationToken.IsCancellationRequested)
        {
            throw new TransportException(GapReason.NoAnswer, "the other side does not even take our questions; flow control, or not a meter? The connection is being opened anew.");
        }
    }

    private async ValueTask<Answer?> NextAsync(CancellationTokenSource timer, CancellationToken cancellationToken)
    {
        try
        {
            while (true)
            {
                var answer = await _answers.Reader.ReadAsync(timer.Token);
                if (!IsEcho(answer.Text))
                {
                    return answer;
                }

                answer.PassOver();
            }
        }
        catch (OperationCanceledException) when (!cancellationToken.IsCancellationRequested)
        {
            return null;
        }
        catch (ChannelClosedException closed) when (closed.InnerException is TransportException gone)
        {
            throw new TransportException(gone.Reason, gone.Message, gone);
        }
    }

    private CancellationTokenSource StartTimer()
    {
        if (!_timer.TryReset())
        {
            _timer.Dispose();
            _timer = new CancellationTokenSource();
        }

        _timer.CancelAfter(TimeSpan.FromSeconds(_asking.Options.ReplyTimeoutSeconds));
        return _timer;
    }
}
