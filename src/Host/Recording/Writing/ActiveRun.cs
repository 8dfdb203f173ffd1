namespace Lampwarden.Host.Recording.Writing;

/// <summary>A run that is being recorded. All but the loss belongs to the writer's thread.</summary>
internal sealed class ActiveRun
{
    private readonly Lock _lossGate = new();
    private Loss _loss;

    /// <summary>Row in the runs table.</summary>
    public long Key { get; set; }

    public string Id { get; set; } = "";

    /// <summary>Entries stored so far: the number of the next one.</summary>
    public long Entries { get; set; }

    /// <summary>Entries stored in short chunks, to be packed into a full one. They are the last of <see cref="Entries"/>.</summary>
    public List<LineReading> Tail { get; } = [];

    /// <summary>Entries of the commit at hand.</summary>
    public List<LineReading> Fresh { get; } = [];

    /// <summary>Time of the last stored entry; 0 before the first.</summary>
    public long LastMs { get; set; }

    /// <summary>The row of the gap that the next missed poll may lengthen; null after a reading.</summary>
    public OpenGap? Gap { get; set; }

    /// <summary>As <see cref="Gap"/>, including the commit at hand.</summary>
    public OpenGap? FreshGap { get; set; }

    /// <summary>Set by the commit at hand when the run ends in it.</summary>
    public RunEnd? End { get; set; }

    public Loss Loss
    {
        get
        {
            lock (_lossGate)
            {
                return _loss;
            }
        }
    }

    public void NoteLoss(double seconds)
    {
        lock (_lossGate)
        {
            _loss = _loss.Count == 0 ? new Loss(1, seconds, seconds) : _loss with { Count = _loss.Count + 1, ToSeconds = seconds };
        }
    }

    /// <summary>The loss as read is on disk; what came since stays.</summary>
    public void LossStored(in Loss stored)
    {
        lock (_lossGate)
        {
            _loss = _loss.Count == stored.Count ? default : new Loss(_loss.Count - stored.Count, stored.ToSeconds, _loss.ToSeconds);
        }
    }
}

internal sealed record OpenGap(long Row, string Reason, long ToMs);

internal readonly record struct Loss(long Count, double FromSeconds, double ToSeconds);
