using System.Text.Json;
using System.Text.Json.Serialization;
using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Soaking;

/// <summary>
/// What a person told the watch during a stored run, told again in its place when the readings are weighed again: else a load
/// that was turned up would be a short the second time.
/// </summary>
public sealed class AnnouncementReplay(IEnumerable<StoredAnnouncement> stored)
{
    /// <summary>Kind of the entry that says that a run began with the first lamps of a bring-up.</summary>
    public const string BringUpBegun = "bring-up-begun";

    /// <summary>Kind of the entry that says that a bring-up is over.</summary>
    public const string BringUpOver = "bring-up-over";

    // A prediction has no number for everything: NaN is written as a word.
    private static readonly JsonSerializerOptions Form = new(JsonSerializerDefaults.Web) { NumberHandling = JsonNumberHandling.AllowNamedFloatingPointLiterals };

    private readonly Queue<StoredAnnouncement> _coming = new(stored);

    /// <summary>An announcement as it is put on record.</summary>
    public static StoredAnnouncement Row(double seconds, Announcement what) => new(
        seconds, AnnouncementWords.NameOf(what.Kind), what.Detail, what.Expectation is null ? null : JsonSerializer.Serialize(what.Expectation, Form));

    /// <summary>The beginning of a bring-up as it is put on record.</summary>
    public static StoredAnnouncement Begun(BenchPlan first) =>
        Row(0, new Announcement(AnnouncementKind.LampSwitched, first.Bank.Text, first.WatchSettings.Expectation)) with { Kind = BringUpBegun };

    /// <summary>What the watch was given at the beginning: of the plan's own bank, or of the first lamps of a bring-up.</summary>
    public static WatchSettings SettingsOf(IReadOnlyList<StoredAnnouncement> stored, WatchSettings ofPlan) =>
        stored.FirstOrDefault(one => one.Kind == BringUpBegun) is { } begun ? ofPlan with { Expectation = Expected(begun) } : ofPlan;

    /// <summary>The bank at which a bring-up was left off; null where there was none, or it was over.</summary>
    public static string? BankOfOpenBringUp(IReadOnlyList<StoredAnnouncement> stored) =>
        stored.Any(one => one.Kind == BringUpBegun) && stored.All(one => one.Kind != BringUpOver)
            ? stored.Last(one => one.Kind == BringUpBegun || AnnouncementWords.KindOf(one.Kind) == AnnouncementKind.LampSwitched).Detail
            : null;

    /// <summary>Tells what was told before a reading.</summary>
    /// <param name="seconds">Of the reading that is weighed next.</param>
    /// <param name="ledger">Whose watch is told.</param>
    /// <returns>What that changed; usually nothing.</returns>
    public IReadOnlyList<FindingChange> Before(double seconds, SoakLedger ledger)
    {
        var changes = new List<FindingChange>();
        while (_coming.TryPeek(out var next) && next.Seconds < seconds)
        {
            _coming.Dequeue();
            if (AnnouncementWords.KindOf(next.Kind) is { } kind)
            {
                changes.AddRange(ledger.Watch.Announce(next.Seconds, new Announcement(kind, next.Detail, Expected(next))));
            }
        }

        return changes;
    }

    private static Expectation? Expected(StoredAnnouncement stored) =>
        stored.ExpectationJson is { } json ? JsonSerializer.Deserialize<Expectation>(json, Form) : null;
}
