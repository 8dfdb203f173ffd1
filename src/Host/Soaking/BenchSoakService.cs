namespace Lampwarden.Host.Soaking;

/// <summary>Hosts the soaks of one bench. A fault in its loop is never logged and left: it ends the host with a failing exit code.</summary>
internal sealed class BenchSoakService(BenchDesk desk, ILogger logger, SoakResults results) : BackgroundService
{
    /// <inheritdoc/>
    protected override async Task ExecuteAsync(CancellationToken stoppingToken)
    {
        try
        {
            await desk.RunAsync(results.Add, stoppingToken);
            results.Done();
        }
        catch (Exception fault) when (fault is not OutOfMemoryException)
        {
            Log.SoakFailed(logger, fault, desk.Name);
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

    /// <summary>A run was closed.</summary>
    public void Add(SoakDocument document)
    {
        lock (_gate)
        {
            _documents.Add(document);
        }
    }

    /// <summary>A bench will soak no more.</summary>
    public void Done()
    {
        lock (_gate)
        {
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
