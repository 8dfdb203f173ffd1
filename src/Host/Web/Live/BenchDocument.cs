using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Soaking;

namespace Lampwarden.Host.Web.Live;

/// <summary>One bench as the page is told of it, whenever something of it changed.</summary>
/// <param name="Bench">Its name.</param>
/// <param name="Mains">Mains text.</param>
/// <param name="Bank">Bank text.</param>
/// <param name="BankTree">The same as a tree, for drawing.</param>
/// <param name="Unit">Unit text.</param>
/// <param name="UnitLabel">What the technician calls the unit itself.</param>
/// <param name="Phase">idle, waiting, settling, learning, watching or ended.</param>
/// <param name="Blind">No reading has come for some seconds: nobody sees the current.</param>
/// <param name="Sentence">What the watch thinks.</param>
/// <param name="Run">Id in the store; null before a run began.</param>
/// <param name="StartedUtc">When it began.</param>
/// <param name="Seconds">How long it has soaked.</param>
/// <param name="PlannedSeconds">How long it is to soak.</param>
/// <param name="Prediction">What should happen.</param>
/// <param name="Findings">Every finding of the run in its latest form.</param>
/// <param name="Alerts">Every alert of the run in its latest state.</param>
/// <param name="Verdict">Once the run is closed.</param>
/// <param name="Reasons">Of the verdict.</param>
/// <param name="BringUp">The steps, where the bench is brought up lamp by lamp.</param>
/// <param name="CanStart">Whether a soak can be started from the page now.</param>
/// <param name="CanEnd">Whether it can be ended from the page.</param>
/// <param name="Now">Its instruments at this moment.</param>
public sealed record BenchDocument(
    string Bench,
    string Mains,
    string Bank,
    BankTree BankTree,
    string Unit,
    string? UnitLabel,
    string Phase,
    bool Blind,
    string? Sentence,
    string? Run,
    DateTimeOffset? StartedUtc,
    double Seconds,
    double PlannedSeconds,
    BenchPrediction Prediction,
    IReadOnlyList<FindingEntry> Findings,
    IReadOnlyList<Alert> Alerts,
    Verdict? Verdict,
    IReadOnlyList<string> Reasons,
    BringUpDocument? BringUp,
    bool CanStart,
    bool CanEnd,
    NowDocument? Now);

/// <summary>A bench's instruments at one moment.</summary>
/// <param name="Bench">Its name.</param>
/// <param name="Run">Id in the store; null before a run began.</param>
/// <param name="Seconds">Of the run.</param>
/// <param name="Sentence">What the watch thinks.</param>
/// <param name="LineAmps">As read; NaN (null) for a gap.</param>
/// <param name="Overload">The meter was over its range.</param>
/// <param name="Mains">Volts of the mains.</param>
/// <param name="Bank">Volts across the bank.</param>
/// <param name="Unit">Volts, watts and ohms of the unit.</param>
/// <param name="Lamps">Every lamp, in the order of the bank's text.</param>
/// <param name="Note">What a reader must know beside the numbers; null where there is nothing.</param>
public sealed record NowDocument(
    string Bench,
    string? Run,
    double Seconds,
    string? Sentence,
    double LineAmps,
    bool Overload,
    MainsNow Mains,
    BankNow Bank,
    UnitNow Unit,
    IReadOnlyList<LampState> Lamps,
    string? Note);

/// <summary>Volts of the mains, with their interval (95 %).</summary>
/// <param name="Measured">False: as configured.</param>
public sealed record MainsNow(double Volts, double LowVolts, double HighVolts, bool Measured);

/// <summary>Volts across the bank, with their interval (95 %).</summary>
public sealed record BankNow(double Volts, double LowVolts, double HighVolts);

/// <summary>The unit, with intervals (95 %); a number that cannot be given is NaN (null), a high end alone means "below".</summary>
public sealed record UnitNow(
    double Volts, double LowVolts, double HighVolts, double Watts, double LowWatts, double HighWatts, double Ohms, double LowOhms, double HighOhms);

/// <summary>Readings since the last such event.</summary>
/// <param name="Bench">Which bench.</param>
/// <param name="Run">Which run.</param>
/// <param name="Seconds">Of the run, ascending.</param>
/// <param name="Amps">NaN (null) for a gap or an overload.</param>
public sealed record ReadingsDocument(string Bench, string Run, double[] Seconds, double[] Amps);

/// <summary>The first event of a stream that does not resume: everything anew.</summary>
/// <param name="Epoch">Marks this process.</param>
/// <param name="Benches">All of them.</param>
public sealed record ResetDocument(string Epoch, IReadOnlyList<BenchDocument> Benches);

/// <summary>A bring-up under way.</summary>
/// <param name="Steps">In order.</param>
/// <param name="At">Which step holds, counted from 0.</param>
/// <param name="State">waiting (for current), ready (for the next lamp), moving (a lamp was switched in), stop (mains off), over.</param>
/// <param name="Sentence">What to do now.</param>
/// <param name="Over">The last step holds.</param>
public sealed record BringUpDocument(IReadOnlyList<BringUpStepDocument> Steps, int At, string State, string Sentence, bool Over);

/// <summary>One step: as in <c>choose --json</c>.</summary>
public sealed record BringUpStepDocument(string Bank, double ExpectLowAmps, double ExpectHighAmps, double StopAboveAmps, string Why);
