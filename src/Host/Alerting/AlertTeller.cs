using System.Threading.Channels;

namespace Lampwarden.Host.Alerting;

/// <summary>
/// Tells alert changes to the routes in order, each change first stored: <paramref name="storedAsync"/> completes when it is.
/// A store that cannot keep up delays the telling by at most <see cref="StoreDeadline"/>: a warning that is not on
/// record is worth more than a record of a warning that nobody got.
/// </summary>
public sealed class AlertTeller(IReadOnlyList<IAlertRoute> routes, Func<CancellationToken, Task> storedAsync, ILogger logger, TimeProvider? time = null) : IAsyncDisposable
{
    /// <summary>The longest wait for the store before an alert is told anyway, in real time.</summary>
    public static readonly TimeSpan StoreDeadline = TimeSpan.FromSeconds(3);

    private readonly Channel<AlertChange> _changes = Channel.CreateBounded<AlertChange>(
        new BoundedChannelOptions(1000) { SingleReader = true, FullMode = BoundedChannelFullMode.DropOldest },
        dropped => Log.AlertDropped(logger, "teller", dropped.Alert.Bench, dropped.Alert.Number, dropped.What));
    private Task? _loop;

    /// <summary>Hands one change over; never waits.</summary>
    public void Tell(AlertChange change)
    {
        _loop ??= Task.Run(RunAsync);
        _changes.Writer.TryWrite(change.Utc == default ? change with { Utc = (time ?? TimeProvider.System).GetUtcNow() } : change);
    }

    /// <summary>Tells what is left, then stops.</summary>
    public async ValueTask DisposeAsync()
    {
        _changes.Writer.TryComplete();
        if (_loop is not null)
        {
            await _loop;
        }
    }

    private async Task RunAsync()
    {
        await foreach (var change in _changes.Reader.ReadAllAsync())
        {
            try
            {
                using var deadline = new CancellationTokenSource(StoreDeadline);
                await storedAsync(deadline.Token).WaitAsync(deadline.Token);
            }
            catch (Exception error) when (error is not OutOfMemoryException)
            {
                Log.AlertNotStored(logger, error, change.Alert.Bench, change.Alert.Number);
            }

            foreach (var route in routes)
            {
                try
                {
                    await route.TellAsync(change, CancellationToken.None);
                }
                catch (Exception error) when (error is not OutOfMemoryException)
                {
                    Log.RouteFailed(logger, error, route.Name, change.Alert.Bench, change.Alert.Number);
                }
            }
        }
    }
}
