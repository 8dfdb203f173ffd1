namespace Lampwarden.Host.Recording.Forwarding;

/// <summary>Runs a forwarder within the service. Its troubles are logged and never stop a soak.</summary>
internal sealed class InfluxService(InfluxForwarder forwarder, ILogger<InfluxService> logger) : BackgroundService
{
    private static readonly TimeSpan AfterStoreTrouble = TimeSpan.FromSeconds(10);

    protected override async Task ExecuteAsync(CancellationToken stoppingToken)
    {
        forwarder.Logger = logger;
        while (!stoppingToken.IsCancellationRequested && !forwarder.Health.Halted)
        {
            try
            {
                await forwarder.RunAsync(stoppingToken);
            }
            catch (OperationCanceledException) when (stoppingToken.IsCancellationRequested)
            {
                return;
            }
            catch (StoreException trouble)
            {
                // The disk is full or the file damaged: the recorder says so itself; the cursor simply stays where it is.
                Log.ForwardingWaits(logger, trouble.Message);
                await Task.Delay(AfterStoreTrouble, stoppingToken).ConfigureAwait(ConfigureAwaitOptions.SuppressThrowing);
            }
        }
    }
}
