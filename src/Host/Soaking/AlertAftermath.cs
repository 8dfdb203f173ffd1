using System.Text.Json;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Soaking;

/// <summary>
/// The alerts that a closed run left open. A run that ends does not make its shorted unit well: what nobody has acknowledged is
/// told again, and can be acknowledged, until the bench's next soak begins. Stored with the run before it is told. Thread-safe.
/// </summary>
public sealed class AlertAftermath : IAsyncDisposable
{
    private readonly Lock _gate = new();
    private readonly AlertBook _book;
    private readonly RunEnded _run;
    private readonly SoakStore _store;
    private readonly SoakSurroundings _around;
    private readonly AlertTeller _teller;
    private readonly long _ended;
    private readonly ITimer _timer;
    private Task _stored = Task.CompletedTask;

    /// <summary>Takes the alerts over from the soak, which uses its book no more.</summary>
    /// <param name="book">The run's alerts.</param>
    /// <param name="run">The run, closed and stored.</param>
    /// <param name="store">Open for recording.</param>
    /// <param name="around">Clock, log, routes, listeners.</param>
    public AlertAftermath(AlertBook book, RunEnded run, SoakStore store, SoakSurroundings around)
    {
        (_book, _run, _store, _around) = (book, run, store, around);
        _ended = around.Time.GetTimestamp();
        _teller = new AlertTeller(around.Routes, stop => Volatile.Read(ref _stored).WaitAsync(stop), around.Logger);
        _timer = around.Time.CreateTimer(_ => Tick(), null, TimeSpan.FromSeconds(1), TimeSpan.FromSeconds(1));
    }

    private double Seconds => _run.Seconds + _around.Time.GetElapsedTime(_ended).TotalSeconds;

    /// <summary>Somebody does something about one of the alerts.</summary>
    /// <param name="decision">Given the book and the seconds of the run.</param>
    /// <returns>The change; null where there was nothing to change.</returns>
    public AlertChange? Decide(Func<AlertBook, double, AlertChange?> decision)
    {
        lock (_gate)
        {
            var change = decision(_book, Seconds);
            Publish(change is null ? [] : [change]);
            return change;
        }
    }

    /// <summary>The bench's next soak begins: what is still open is closed, so that nobody takes it for the next unit's.</summary>
    public void Close()
    {
        lock (_gate)
        {
            Publish(_book.CloseAll(Seconds));
        }
    }

    /// <summary>Tells what is left, then stops. What is open stays open on record.</summary>
    public async ValueTask DisposeAsync()
    {
        await _timer.DisposeAsync();
        await _teller.DisposeAsync();
    }

    private void Tick()
    {
        lock (_gate)
        {
            Publish(_book.Tick(Seconds));
        }
    }

    private void Publish(IReadOnlyList<AlertChange> changes)
    {
        foreach (var change in changes)
        {
            // One after the other: the teller waits for the latest, which is stored last.
            _stored = _store.AddAlertChangeAsync(_run.Document.Run!, AlertRows.Of(change, _around.Time.GetUtcNow()));
            foreach (var listener in _around.Listeners)
            {
                listener.Hear(new AlertChanged(_run.Bench, change));
            }

            _teller.Tell(change);
        }
    }
}

/// <summary>How an alert's change is put on record.</summary>
internal static class AlertRows
{
    public static StoredAlertChange Of(AlertChange change, DateTimeOffset utc) => new(
        change.Seconds, utc, FormattableString.Invariant($"{change.Alert.Number}"), change.What, change.Alert.State.ToString(), change.By, change.Alert.Text,
        JsonSerializer.Serialize(change, Json.Compact));
}
