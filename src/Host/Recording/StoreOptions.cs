namespace Lampwarden.Host.Recording;

/// <summary>How a store is opened.</summary>
public enum StoreMode
{
    /// <summary>By the one program that records into the folder: takes the folder's lock and closes interrupted runs.</summary>
    Recording,

    /// <summary>Beside a recording program or without one: to look, import, note. Changes no run that may still be going on.</summary>
    Review,
}

/// <summary>Sizes and times of a store. The defaults are those the documents speak of.</summary>
public sealed record StoreOptions
{
    /// <summary>
    /// Longest wait between two commits, in real time. Below a second by the length of a slow commit, so that a kill
    /// at the worst moment loses no more than the last second.
    /// </summary>
    public TimeSpan CommitEvery { get; init; } = TimeSpan.FromMilliseconds(800);

    /// <summary>Entries that may wait for the disk, all runs together; more than that is refused and counted. 100 to 10,000,000.</summary>
    public int QueueCapacity { get; init; } = 65_536;

    /// <summary>Places of the queue that readings may not take, so that alerts still fit when readings no longer do.</summary>
    public int QueueReserve { get; init; } = 4_096;

    /// <summary>Entries that make a full chunk; fewer wait in short chunks. 16 to 1,000,000.</summary>
    public int ChunkReadings { get; init; } = 16_384;
}
