using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Soaking;

/// <summary>Hosts the soak of one bench. A fault in its loop is never logged and left: it ends the host with a failing exit code.</summary>
internal sealed class BenchSoakService(BenchPlan plan, SoakStore store, SoakSurroundings around, SoakResults results) : BackgroundService
{
    /// <inheritdoc/>
    protected override async Task ExecuteAsync(CancellationToken stoppingToken)
    {
        try
        {
            results.Add(await new Soak(plan, store, around).RunAsync(stoppingToken));
        }
        catch (Exception fault) when (fault is not OutOfMemoryException)
        {
            Log.SoakFailed(around.Logger, fault, plan.Name);
            results.Fail(fault);
        }
    }
}

/// <summary>Collects what came of the soaks and says when all benches are done. Thread-safe.</summary>
internal sealed class SoakResults(int benches, Action allDone)
{
    private readonly Lock _gate = new();
    private readonly List<SoakDocument> _documents = [];
    private int _left = benches;

    /// <summary>The first fault that ended a soak; null while none did.</summary>
    public Exception? Fault { get; private set; }

    /// <summary>Documents of the closed runs, in the order they closed.</summary>
    public IReadOnlyList<SoakDocument> Documents
    {
        get
        {
            lock (_gate)
            {
                return [.. _documents];
            }
        }
    }

    /// <summary>A soak ended; null where it never began.</summary>
    public void Add(SoakDocument? document)
    {
        lock (_gate)
        {
            if (document is not null)
            {
                _documents.Add(document);
            }

            Count();
        }
    }

    /// <summary>A soak died of a fault: the others are stopped too, because nobody may think this bench is watched.</summary>
    public void Fail(Exception fault)
    {
        lock (_gate)
        {
            Fault ??= fault;
            _left = 1;
            Count();
        }
    }

    private void Count()
    {
        if (--_left == 0)
        {
            allDone();
        }
    }
}
