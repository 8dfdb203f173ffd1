using Lampwarden.Acquisition;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Life;

namespace Lampwarden.Host.Soaking;

/// <summary>One thing for a soak's loop: an event of a meter, or something a person does.</summary>
internal readonly record struct SoakInput(MeterOptions? Meter, MeterEvent Event, Action<Soak>? Do);

/// <summary>What a soak is given besides its plan and its store.</summary>
/// <param name="Time">The clock of polls and time stamps.</param>
/// <param name="Logger">For structured events.</param>
/// <param name="Routes">Who is told of alerts.</param>
/// <param name="Listeners">Who looks on.</param>
/// <param name="Rules">How alerts live; null for the defaults.</param>
public sealed record SoakSurroundings(
    TimeProvider Time, ILogger Logger, IReadOnlyList<IAlertRoute> Routes, IReadOnlyList<ISoakListener> Listeners, AlertRules? Rules = null);
