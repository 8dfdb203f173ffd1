namespace Lampwarden.Host.Recording.Writing;

/// <summary>One thing to store: a reading of a run, or an action.</summary>
internal readonly record struct WriteItem(ActiveRun? Run, LineReading Reading, StoreAction? Action);

/// <summary>Anything stored that is not a plain reading.</summary>
/// <param name="apply">Runs on the writer's thread, inside its transaction; null only waits for what came before.</param>
internal sealed class StoreAction(Action<StoreBatch>? apply)
{
    private readonly TaskCompletionSource<StoreException?> _done = new(TaskCreationOptions.RunContinuationsAsynchronously);

    public Action<StoreBatch>? Apply { get; } = apply;

    /// <summary>Somebody waits: commit at once.</summary>
    public bool Hurry { get; init; }

    /// <summary>May take the places of the queue that are kept for alerts.</summary>
    public bool Important { get; init; } = true;

    /// <summary>Whoever asked is told of the failure and decides; without it the action stays in the queue until it can be stored.</summary>
    public bool GiveUpOnTrouble { get; init; }

    /// <summary>Null once it is on disk, otherwise why it is not.</summary>
    public Task<StoreException?> Done => _done.Task;

    public void Finish(StoreException? trouble) => _done.TrySetResult(trouble);
}
