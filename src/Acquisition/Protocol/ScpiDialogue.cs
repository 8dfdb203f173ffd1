using System.Collections.Concurrent;
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
    private const int MostWaiting = 64; // more lines than this between two questions is babble: the newest are refused and counted
    private readonly ConcurrentQueue<Answer> _answers = new();
    // Rung once all lines of a piece lie in the queue: whoever wakes at the first must see the second, which may contradict it.
    // The asking task goes on at once on the reading task's thread: a wake-up of another thread costs more than all of a poll's own work.
    private readonly Channel<bool> _bell = Channel.CreateBounded<bool>(
        new BoundedChannelOptions(1) { SingleReader = true, SingleWriter = true, AllowSynchronousContinuations = true, FullMode = BoundedChannelFullMode.DropWrite });
    private readonly Dictionary<string, byte[]> _commands = new(StringComparer.Ordinal);
    private readonly Wire _wire;
    private CancellationTokenSource _timer = new();
    private volatile Station _asking;
    private byte[] _last = [];
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

    /// <summary>
    /// Refuses what came unasked; returns how many of those lines say something else than the last answer. The same line again is a
    /// stutter and does no harm; anything else means that the two sides may be out of step.
    /// </summary>
    public int RefuseUnasked()
    {
        var count = 0;
        while (_answers.TryDequeue(out var late))
        {
            if (IsEcho(late.Text))
            {
                late.PassOver();
                continue;
            }

            late.Refuse(GapReason.StaleAnswer);
            count += late.Text.SequenceEqual(ScpiNumber.TrimBlanks(_last)) ? 0 : 1;
        }

        return count;
    }

    /// <summary>Another line lies there already that says something else: two answers to one question, of which none can be believed.</summary>
    public bool IsContradicted(Answer answer)
    {
        foreach (var other in _answers)
        {
            if (!IsEcho(other.Text) && !other.Text.SequenceEqual(answer.Text))
            {
                return true;
            }
        }

        return false;
    }

    /// <summary>Forgets a line that began and never ended, so that the next answer is not glued to it.</summary>
    public void DropUnfinished() => _wire.DropUnfinished = true;

    /// <summary>The reading task has ended.</summary>
    public void Complete(Exception? fault) => _bell.Writer.TryComplete(fault);

    /// <inheritdoc/>
    public void Dispose() => _timer.Dispose();

    void ILineSink.OnLine(ReadOnlySpan<byte> line, long firstByteStamp, long lastByteStamp, bool stale)
    {
        var health = _asking.Health;
        health.LineReceived();
        if (_answers.Count >= MostWaiting)
        {
            health.LineRefused(GapReason.StaleAnswer);
            return;
        }

        _answers.Enqueue(new Answer(line.ToArray(), firstByteStamp, lastByteStamp, health));
    }

    void ILineSink.OnLineTooLong(long stamp)
    {
        var health = _asking.Health;
        health.LineReceived();
        health.LineRefused(GapReason.LineTooLong);
        health.Problem(Wire.TooLong);
        _sawLineTooLong = true;
    }

    ValueTask ILineSink.RoomAsync(CancellationToken cancellationToken)
    {
        if (!_answers.IsEmpty)
        {
            _bell.Writer.TryWrite(true);
        }

        return ValueTask.CompletedTask;
    }

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
                if (!_answers.TryDequeue(out var answer))
                {
                    await _bell.Reader.ReadAsync(timer.Token);
                }
                else if (IsEcho(answer.Text))
                {
                    answer.PassOver();
                }
                else
                {
                    _last = answer.Bytes;
                    return answer;
                }
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
