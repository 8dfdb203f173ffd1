namespace Lampwarden.Benchmarks.Unattended;

/// <summary>One fault of the campaign.</summary>
/// <param name="Area">meter, store, disk, clock, route, server, process, settings or cut-off.</param>
/// <param name="Injected">What is done to the service.</param>
/// <param name="Promised">What the documents promise then.</param>
/// <param name="Run">Does it and says what happened; throws <see cref="BrokenPromiseException"/> where the promise is not kept.</param>
internal sealed record Fault(string Area, string Injected, string Promised, Func<Task<string>> Run);

/// <summary>The service did not do what it promises.</summary>
internal sealed class BrokenPromiseException(string message) : Exception(message)
{
    /// <summary>Throws unless it is so.</summary>
    public static void Unless(bool kept, string otherwise)
    {
        if (!kept)
        {
            throw new BrokenPromiseException(otherwise);
        }
    }
}

/// <summary>The fault cannot be injected on this computer.</summary>
internal sealed class NotHereException(string message) : Exception(message);
