namespace Lampwarden.Host.Recording;

/// <summary>How recording goes. Counts balance: accepted = stored + waiting, and offered = accepted + refused.</summary>
/// <param name="Accepted">Entries taken into the queue since the store was opened.</param>
/// <param name="Stored">Entries that are on disk.</param>
/// <param name="Waiting">Entries in the queue.</param>
/// <param name="Refused">Entries lost because the queue was full, because the store was closing, or because they could not be stored at all.</param>
/// <param name="Trouble">Why nothing can be stored at present, in one sentence; null while all is well.</param>
/// <param name="LastCommitUtc">When the last commit ended, by the system's clock; null before the first.</param>
public sealed record StoreHealth(long Accepted, long Stored, long Waiting, long Refused, string? Trouble, DateTimeOffset? LastCommitUtc);
