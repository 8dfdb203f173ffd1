using System.Threading.Channels;
using Lampwarden.Acquisition;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Configuration;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Soaking;

/// <summary>What somebody wants to soak.</summary>
/// <param name="Unit">Unit text.</param>
/// <param name="Bank">Bank text.</param>
/// <param name="PlannedHours">0.001 to 1000.</param>
/// <param name="UnitLabel">A job or serial number; null for none.</param>
/// <param name="BringUp">Whether the lamps are switched in one after the other.</param>
public sealed record SoakRequest(string Unit, string Bank, double PlannedHours, string? UnitLabel = null, bool BringUp = false);

/// <summary>One bench over time: a soak, and where a page can start others, the time between them. Its members are safe from any thread.</summary>
public sealed class BenchDesk(BenchPlan configured, LampInventory inventory, SoakStore store, SoakSurroundings around, bool staysOpen, TimeSpan? resumeWithin = null)
{
    private BenchPlan? _plan;

    // Whoever starts a soak on the page still has to walk to the bench.
    private const double SwitchOnSeconds = 300;

    private readonly Channel<(BenchPlan Plan, BringUp? BringUp)> _requests = Channel.CreateBounded<(BenchPlan, BringUp?)>(1);
    private readonly Lock _gate = new();
    private CancellationTokenSource? _ending;
    private MeterRoll? _idleMeters;
    private AlertAftermath? _aftermath;
    private bool _free;

    /// <summary>The bench's name.</summary>
    public string Name => configured.Name;

    /// <summary>Its mains, and the lamps its bank texts may name.</summary>
    public (Mains Mains, LampInventory Inventory) Texts => (configured.Mains, inventory);

    /// <summary>The soak under way or waiting for current; null between soaks.</summary>
    public Soak? Soak { get; private set; }

    /// <summary>The plan of the present soak, or of the last.</summary>
    public BenchPlan Plan => Volatile.Read(ref _plan) ?? configured;

    /// <summary>How its meters are doing.</summary>
    public IReadOnlyList<(MeterOptions Meter, MeterHealth Health)> Meters => Soak?.Meters ?? Volatile.Read(ref _idleMeters)?.Health ?? [];

    /// <summary>Whether there are alerts to decide on: of the soak under way, or left open by the last.</summary>
    public bool HasAlerts => Soak is not null || Volatile.Read(ref _aftermath) is not null;

    /// <summary>Somebody does something about an alert of this bench.</summary>
    /// <param name="decision">Given the book and the seconds of the run.</param>
    /// <returns>The change; null where there was nothing to change.</returns>
    public Task<AlertChange?> DecideAsync(Func<AlertBook, double, AlertChange?> decision) =>
        Soak is { } soak ? soak.DecideAsync(decision) : Task.FromResult(Volatile.Read(ref _aftermath)?.Decide(decision));

    /// <summary>Makes a plan of what somebody wants, without starting anything.</summary>
    /// <exception cref="FormatException">A text cannot be read.</exception>
    /// <exception cref="BadInputException">A number is out of its range.</exception>
    public BenchPlan PlanFor(SoakRequest request) => request.PlannedHours is >= 0.001 and <= 1000
        ? BenchPlan.From(
            configured.Options.With(
                request.Bank, request.Unit, request.PlannedHours, request.UnitLabel, Math.Max(configured.Options.Soak.SwitchOnWaitSeconds, SwitchOnSeconds)),
            inventory)
        : throw new BadInputException(FormattableString.Invariant($"plannedHours is {request.PlannedHours}; expected 0.001 to 1000."));

    /// <summary>The steps by which a plan's bank can be switched in.</summary>
    public IReadOnlyList<BringUpStep> StepsOf(BenchPlan plan) => BringUpPlanner.Steps(plan, inventory);

    /// <summary>Starts a soak: it waits for current from now on.</summary>
    /// <returns>False where the bench is not free.</returns>
    /// <exception cref="FormatException">A text cannot be read.</exception>
    /// <exception cref="BadInputException">A number is out of its range, or the bank cannot carry the unit.</exception>
    public bool TryStart(SoakRequest request)
    {
        var plan = PlanFor(request);
        var bringUp = request.BringUp ? new BringUp(StepsOf(plan)) : null;
        lock (_gate)
        {
            if (!_free || !_requests.Writer.TryWrite((plan, bringUp)))
            {
                return false;
            }

            _free = false;
        }

        Log.SoakAsked(around.Logger, Name, plan.Unit.Text, plan.Bank.Text);
        return true;
    }

    /// <summary>Ends the soak: it is judged as it stands. The mains is not switched by this.</summary>
    /// <returns>False where there is none, or the bench ends with its only soak.</returns>
    public bool TryEnd()
    {
        lock (_gate)
        {
            if (!staysOpen || _ending is null)
            {
                return false;
            }

            _ending.Cancel();
            return true;
        }
    }

    /// <summary>Soaks, and between soaks waits, until told to stop; without a page it ends with its first soak.</summary>
    /// <param name="closed">Told of every run that was closed.</param>
    /// <param name="stop">Ends it; a run under way is still closed and stored.</param>
    public async Task RunAsync(Action<SoakDocument> closed, CancellationToken stop)
    {
        (BenchPlan Plan, BringUp? BringUp)? next = configured.Options.Soak.StartFrom == "page" && staysOpen ? null : (configured, null);
        var resumption = resumeWithin is { } within ? SoakResumption.Find(store, Name, within, around.Time.GetUtcNow()) : null;
        if (resumption is not null)
        {
            var last = resumption.Last;
            var plan = BenchPlan.From(configured.Options.With(last.Bank, last.Unit, last.PlannedHours, last.UnitLabel), inventory);
            next = (plan, AnnouncementReplay.BankOfOpenBringUp(resumption.Announcements) is { } bank ? BringUp.TakeUp(StepsOf(plan), bank) : null);
        }

        while (!stop.IsCancellationRequested)
        {
            if (next is null)
            {
                if (await IdleAsync(stop) is not { } request)
                {
                    await EndAftermathAsync(close: false);
                    return;
                }

                next = request;
            }

            await SoakAsync(next.Value.Plan, next.Value.BringUp, resumption, closed, stop);
            (next, resumption) = (null, null);
            if (!staysOpen)
            {
                return;
            }
        }
    }

    private async Task SoakAsync(BenchPlan plan, BringUp? bringUp, SoakResumption? resumption, Action<SoakDocument> closed, CancellationToken stop)
    {
        using var ending = CancellationTokenSource.CreateLinkedTokenSource(stop);
        await EndAftermathAsync(close: true);
        lock (_gate)
        {
            _ending = ending;
            Volatile.Write(ref _plan, plan);
            Soak = new Soak(plan, store, around, bringUp, resumption);
        }

        Tell(new PlanChanged(Name, bringUp?.Plan ?? plan));
        Tell(new DeskChanged(Name, Idle: false, CanStart: false, CanEnd: staysOpen));
        try
        {
            if (await Soak.RunAsync(ending.Token, stop) is { } document)
            {
                closed(document);
            }

            // Where the bench ends with its soak, nobody is left to tell; where the service ends, the next one takes the run's alerts over.
            Volatile.Write(ref _aftermath, staysOpen && !stop.IsCancellationRequested ? Soak.LeaveAlerts() : null);
        }
        finally
        {
            lock (_gate)
            {
                (_ending, Soak) = (null, null);
            }
        }
    }

    private async Task EndAftermathAsync(bool close)
    {
        if (Interlocked.Exchange(ref _aftermath, null) is { } aftermath)
        {
            if (close)
            {
                aftermath.Close();
            }

            await aftermath.DisposeAsync();
        }
    }

    // Between soaks the meters are still read: a live unit that nobody watches is worth a word.
    private async Task<(BenchPlan, BringUp?)?> IdleAsync(CancellationToken stop)
    {
        using var leaving = CancellationTokenSource.CreateLinkedTokenSource(stop);
        var inputs = Channel.CreateBounded<SoakInput>(64);
        var meters = new MeterRoll(Plan, around);
        Volatile.Write(ref _idleMeters, meters);
        var pumps = meters.PumpAsync(inputs.Writer, leaving.Token);
        var looking = LookAsync(meters, inputs.Reader, leaving.Token);
        lock (_gate)
        {
            _free = true;
        }

        Tell(new DeskChanged(Name, Idle: true, CanStart: true, CanEnd: false));
        try
        {
            return await _requests.Reader.ReadAsync(stop);
        }
        catch (OperationCanceledException) when (stop.IsCancellationRequested)
        {
            return null;
        }
        finally
        {
            await leaving.CancelAsync();
            await Task.WhenAll(pumps, looking);
            Volatile.Write(ref _idleMeters, null);
        }
    }

    private async Task LookAsync(MeterRoll meters, ChannelReader<SoakInput> inputs, CancellationToken stop)
    {
        try
        {
            await foreach (var input in inputs.ReadAllAsync(stop))
            {
                if (meters.Take(input.Meter!, input.Event, out var look))
                {
                    Tell(new IdleLook(Name, look.LineAmps, look.MainsVolts));
                }
            }
        }
        catch (OperationCanceledException) when (stop.IsCancellationRequested)
        {
            // A soak begins, or the service ends.
        }
    }

    private void Tell(SoakEvent happened)
    {
        foreach (var listener in around.Listeners)
        {
            listener.Hear(happened);
        }
    }
}
