using System.Runtime.CompilerServices;
using Lampwarden.Acquisition.Transport;

namespace Lampwarden.Acquisition;

/// <summary>
/// A meter for as long as it is wanted: opened, asked or listened to, and opened again whenever it goes away. Every poll (or line, or
/// silent interval), and every attempt to reopen, gives exactly one event. Sessions of one process with the same transport share its wire.
/// Not thread-safe but for <see cref="Health"/>, <see cref="Hurry"/> and disposal.
/// </summary>
public sealed class MeterSession : IAsyncDisposable
{
    private static readonly TimeSpan LongestEnd = TimeSpan.FromSeconds(5);
    private readonly MeterOptions _options;
    private readonly TimeProvider _time;
    private readonly IMeterTransport? _transport;
    private readonly HealthBook _health = new();
    private readonly Station _station;
    private readonly CancellationTokenSource _disposed = new();
    private readonly Lock _gate = new();
    private Func<Task>? _detach;
    private Task? _detached;
    private int _begun;
    private int _over;

    /// <summary>Makes a session; opens nothing yet.</summary>
    /// <param name="options">The meter, valid (see <see cref="MeterRules"/>); not to be changed any more.</param>
    /// <param name="time">Clock of polls and time stamps. Reply timeouts follow the real clock whatever this one does.</param>
    /// <param name="transport">A wire of this session's own; null makes it from the options, shared with other sessions on the same port.</param>
    /// <param name="originStamp">Time stamp of <paramref name="time"/> from which events count their seconds; null: now. Give two meters of a bench the same.</param>
    public MeterSession(MeterOptions options, TimeProvider time, IMeterTransport? transport = null, long? originStamp = null)
    {
        _options = options;
        _time = time;
        _transport = transport;
        var clock = new SessionClock(time, originStamp ?? time.GetTimestamp(), _health);
        _station = new Station(options, new EventOutlet(clock, _health, options.WindowSeconds));
        foreach (var warning in MeterRules.Warnings(options))
        {
            _health.Problem(warning);
        }
    }

    /// <summary>How the meter is doing now. Safe to ask from any thread at any time.</summary>
    public MeterHealth Health => _health.Snapshot();

    /// <summary>
    /// Polls as fast as the meter answers for so long, at most 100 times a second: for the moment of switch-on. A free-running meter
    /// keeps its own pace. The session does this by itself when the current rises from nothing (<see cref="MeterOptions.SwitchOnSeconds"/>).
    /// </summary>
    public void Hurry(TimeSpan time) => _station.Schedule.HurryFor(time);

    /// <summary>
    /// Opens the meter and gives its events, for ever: trouble becomes gaps. Ends when the session is disposed.
    /// A consumer that is slow holds the meter back, nothing is dropped; it should take an event within about a second.
    /// </summary>
    /// <exception cref="OperationCanceledException">The token said stop.</exception>
    /// <exception cref="InvalidOperationException">The session is or was being read already.</exception>
    public async IAsyncEnumerable<MeterEvent> ReadAsync([EnumeratorCancellation] CancellationToken cancellationToken = default)
    {
        if (Interlocked.Exchange(ref _begun, 1) != 0)
        {
            throw new InvalidOperationException($"The session of meter '{_options.Name}' gives its events once. Make another session.");
        }

        cancellationToken.ThrowIfCancellationRequested();
        ObjectDisposedException.ThrowIf(_over != 0, this);
        _detach = await MeterLines.AttachAsync(_station, _time, _transport);
        using var stop = CancellationTokenSource.CreateLinkedTokenSource(cancellationToken, _disposed.Token);
        await using var whenStopped = stop.Token.UnsafeRegister(static outlet => ((EventOutlet)outlet!).Complete(null), _station.Outlet);
        try
        {
            while (await _station.Outlet.Reader.WaitToReadAsync(CancellationToken.None))
            {
                while (_station.Outlet.Reader.TryRead(out var several))
                {
                    foreach (var one in several)
                    {
                        yield return one;
                    }
                }
            }

            cancellationToken.ThrowIfCancellationRequested();
        }
        finally
        {
            await DetachOnceAsync();
        }
    }

    /// <summary>Stops reading and closes the meter; comes back within seconds even when the driver does not.</summary>
    public async ValueTask DisposeAsync()
    {
        if (Interlocked.Exchange(ref _over, 1) != 0)
        {
            return;
        }

        await _disposed.CancelAsync();
        try
        {
            await DetachOnceAsync().WaitAsync(LongestEnd);
        }
        catch (TimeoutException)
        {
            _health.Problem($"{_options.Transport.Port} did not let itself be closed within {LongestEnd.TotalSeconds:0} s and was left behind");
        }

        _disposed.Dispose();
    }

    private Task DetachOnceAsync()
    {
        lock (_gate)
        {
            return _detached ??= _detach?.Invoke() ?? Task.CompletedTask;
        }
    }
}
