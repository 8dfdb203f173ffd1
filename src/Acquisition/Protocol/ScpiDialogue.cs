using System.Text;
using System.Threading.Channels;
using Lampwarden.Acquisition.Transport;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>A line that came back, with the arrival of its first and last byte.</summary>
internal readonly record struct Answer(byte[] Bytes, long FirstByteStamp, long LastByteStamp)
{
    public ReadOnlySpan<byte> Text => ScpiNumber.TrimBlanks(Bytes);

    public override string ToString() => Encoding.Latin1.GetString(Text);
}

/// <summary>
/// One question at a time over a wire. Lines are taken in all the time, so one that lay there before a question was asked is known to be
/// no answer to it. Owned by the task that asks; <see cref="ILineSink"/> is called by the task that reads.
/// </summary>
internal sealed class ScpiDialogue : ILineSink, IDisposable
{
    // More lines than this between two questions is babble: the newest are refused and counted.
    private readonly Channel<Answer> _answers = Channel.CreateBounded<Answer>(new BoundedChannelOptions(64) { SingleReader = true, SingleWriter = true });
    private readonly Wire _wire;
    private readonly HealthBook _health;
    private readonly TimeSpan _patience;
    private CancellationTokenSource _timer = new();
    private byte[] _asked = [];

    public ScpiDialogue(Wire wire, HealthBook health, TimeSpan patience)
    {
        _wire = wire;
        _health = health;
        _patience = patience;
    }

    /// <summary>Bytes of a line that has begun and not ended.</summary>
    public int UnfinishedBytes => _wire.UnfinishedBytes;

    /// <summary>Sends a command that has no answer, or whose answers <see cref="NextAsync"/> fetches.</summary>
    public ValueTask SendAsync(string command, CancellationToken cancellationToken)
    {
        _asked = Encoding.ASCII.GetBytes(command + "\n");
        return _wire.SendAsync(_asked, cancellationToken);
    }

    /// <summary>Refuses what came unasked; returns how many lines that were.</summary>
    public int RefuseUnasked()
    {
        var count = 0;
        while (_answers.Reader.TryRead(out var late))
        {
            if (IsEcho(late.Text))
            {
                _health.LinePassedOver();
                continue;
            }

            _health.LineRefused(GapReason.StaleAnswer);
            count++;
        }

        return count;
    }

    /// <summary>The next line that is no echo of the command, or null after the patience is over; in real time, whatever clock the polls follow.</summary>
    /// <exception cref="TransportException">The wire is gone.</exception>
    public async ValueTask<Answer?> NextAsync(CancellationToken cancellationToken)
    {
        var timer = StartTimer();
        await using var stop = cancellationToken.UnsafeRegister(static source => ((CancellationTokenSource)source!).Cancel(), timer);
        try
        {
            while (true)
            {
                var answer = await _answers.Reader.ReadAsync(timer.Token);
                if (!IsEcho(answer.Text))
                {
                    return answer;
                }

                _health.LinePassedOver();
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

    /// <summary>Forgets a line that began and never ended, so that the next answer is not glued to it.</summary>
    public void DropUnfinished() => _wire.DropUnfinished = true;

    /// <summary>The reading task has ended.</summary>
    public void Complete(Exception? fault) => _answers.Writer.TryComplete(fault);

    /// <inheritdoc/>
    public void Dispose() => _timer.Dispose();

    void ILineSink.OnLine(ReadOnlySpan<byte> line, long firstByteStamp, long lastByteStamp)
    {
        _health.LineReceived();
        if (!_answers.Writer.TryWrite(new Answer(line.ToArray(), firstByteStamp, lastByteStamp)))
        {
            _health.LineRefused(GapReason.StaleAnswer);
        }
    }

    void ILineSink.OnLineTooLong(long stamp)
    {
        _health.LineReceived();
        _health.LineRefused(GapReason.LineTooLong);
        _health.Problem("the meter sends lines longer than 4096 bytes; they are thrown away. Wrong baud rate, or not a meter?");
    }

    ValueTask ILineSink.RoomAsync(CancellationToken cancellationToken) => ValueTask.CompletedTask;

    private bool IsEcho(ReadOnlySpan<byte> text) => _asked.Length > 1 && text.SequenceEqual(_asked.AsSpan(0, _asked.Length - 1));

    private CancellationTokenSource StartTimer()
    {
        if (!_timer.TryReset())
        {
            _timer.Dispose();
            _timer = new CancellationTokenSource();
        }

        _timer.CancelAfter(_patience);
        return _timer;
    }
}
