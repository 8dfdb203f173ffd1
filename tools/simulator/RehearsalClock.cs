using System.Diagnostics;
using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Simulator;

/// <summary>
/// Time that runs a number of times faster than life, in small even steps. When the computer is held up, this clock is
/// held up with it: a stall of a tenth of a second would otherwise look, forty times faster, like a meter that was silent for four.
/// For the same reason it waits for a bench that is still being asked (<see cref="Pulse"/>), but only a moment of real time.
/// </summary>
public sealed class RehearsalClock : FakeTimeProvider, IDisposable
{
    // The largest step a reader of the clock may see, whatever the computer does meanwhile.
    private const double LongestStepSeconds = 0.1;

    // So long, in real time, a pulse is waited for: the first while programs start, later ones until a cable must be pulled.
    private static readonly TimeSpan FirstPatience = TimeSpan.FromSeconds(5);
    private static readonly TimeSpan Patience = TimeSpan.FromMilliseconds(1500);

    private readonly CancellationTokenSource _over = new();
    private readonly Thread _thread;
    private readonly double _pulseEverySeconds;
    private long _pulseStamp;
    private bool _pulsed;
    private double _sincePulseSeconds;

    /// <summary>Makes a clock that stands at the present until <see cref="Begin"/>.</summary>
    /// <param name="speed">0.1 to 1000; what the computer can keep up with sets the real limit.</param>
    /// <param name="pulseEverySeconds">Our seconds within which a pulse should come; infinite to wait for none.</param>
    public RehearsalClock(double speed, double pulseEverySeconds = double.PositiveInfinity)
        : base(System.GetUtcNow())
    {
        Speed = speed;
        _pulseEverySeconds = pulseEverySeconds;
        _thread = new Thread(Run) { IsBackground = true, Name = "rehearsal clock" };
    }

    /// <summary>How many of our seconds pass in one of the world's, at best.</summary>
    public double Speed { get; }

    /// <summary>Lets the clock run. Once.</summary>
    public void Begin()
    {
        _pulseStamp = Stopwatch.GetTimestamp();
        _thread.Start();
    }

    /// <summary>Says that the bench was asked just now. Safe from any thread.</summary>
    public void Pulse()
    {
        Interlocked.Exchange(ref _pulseStamp, Stopwatch.GetTimestamp());
        Interlocked.Exchange(ref _sincePulseSeconds, 0);
        Volatile.Write(ref _pulsed, true);
    }

    /// <summary>Stops the clock; timers that are not due yet never are.</summary>
    public void Dispose()
    {
        _over.Cancel();
        if (_thread.IsAlive && Thread.CurrentThread != _thread)
        {
            _thread.Join();
        }

        _over.Dispose();
    }

    private void Run()
    {
        var last = Stopwatch.GetTimestamp();
        while (!_over.IsCancellationRequested)
        {
            Thread.Sleep(1);
            var now = Stopwatch.GetTimestamp();
            var step = Math.Min(Stopwatch.GetElapsedTime(last, now).TotalSeconds * Speed, Math.Max(LongestStepSeconds, Speed * 0.001));
            last = now;
            if (Interlocked.CompareExchange(ref _sincePulseSeconds, 0, 0) + step > _pulseEverySeconds
                && Stopwatch.GetElapsedTime(Interlocked.Read(ref _pulseStamp), now) < (Volatile.Read(ref _pulsed) ? Patience : FirstPatience))
            {
                continue;
            }

            Interlocked.Exchange(ref _sincePulseSeconds, _sincePulseSeconds + step);
            Advance(TimeSpan.FromSeconds(step));
        }
    }
}
