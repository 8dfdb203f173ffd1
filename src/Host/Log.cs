using Microsoft.Extensions.Logging;

namespace Lampwarden.Host;

/// <summary>Every structured log event of the host. Ids and names are stable: people filter on them.</summary>
internal static partial class Log
{
    [LoggerMessage(EventId = 100, EventName = "SoakStarted", Level = LogLevel.Information, Message = "{Bench}: soak {Run} began: {Unit} behind {Bank} at {Mains}")]
    public static partial void SoakStarted(ILogger logger, string bench, string run, string unit, string bank, string mains);

    [LoggerMessage(EventId = 101, EventName = "SoakEnded", Level = LogLevel.Information, Message = "{Bench}: soak {Run} ended: {Verdict} after {Seconds:F0} s, {Readings} readings")]
    public static partial void SoakEnded(ILogger logger, string bench, string run, string verdict, double seconds, long readings);

    [LoggerMessage(EventId = 102, EventName = "SoakFailed", Level = LogLevel.Critical, Message = "{Bench}: the soak's loop failed; the unit is not watched")]
    public static partial void SoakFailed(ILogger logger, Exception error, string bench);

    [LoggerMessage(EventId = 103, EventName = "WaitingForSwitchOn", Level = LogLevel.Information, Message = "{Bench}: waiting for switch-on, at most {Seconds:F0} s")]
    public static partial void WaitingForSwitchOn(ILogger logger, string bench, double seconds);

    [LoggerMessage(EventId = 104, EventName = "NoteNotStored", Level = LogLevel.Warning, Message = "{Bench}: a note of the run could not be stored")]
    public static partial void NoteNotStored(ILogger logger, Exception error, string bench);

    [LoggerMessage(EventId = 105, EventName = "SoakAsked", Level = LogLevel.Information, Message = "{Bench}: a soak was started from the page: {Unit} behind {Bank}")]
    public static partial void SoakAsked(ILogger logger, string bench, string unit, string bank);

    [LoggerMessage(EventId = 200, EventName = "MeterIdentified", Level = LogLevel.Information, Message = "{Bench}: meter {Meter} says it is {Identity}")]
    public static partial void MeterIdentified(ILogger logger, string bench, string meter, string identity);

    [LoggerMessage(EventId = 201, EventName = "MeterGap", Level = LogLevel.Warning, Message = "{Bench}: meter {Meter} gives no reading ({Reason}): {Detail}")]
    public static partial void MeterGap(ILogger logger, string bench, string meter, string reason, string? detail);

    [LoggerMessage(EventId = 202, EventName = "MeterRecovered", Level = LogLevel.Information, Message = "{Bench}: meter {Meter} reads again after {Seconds:F1} s")]
    public static partial void MeterRecovered(ILogger logger, string bench, string meter, double seconds);

    [LoggerMessage(EventId = 203, EventName = "MeterWarning", Level = LogLevel.Warning, Message = "{Bench}: meter {Meter}: {Text}")]
    public static partial void MeterWarning(ILogger logger, string bench, string meter, string text);

    [LoggerMessage(EventId = 300, EventName = "AlertTold", Message = "{Bench}: alert {What}: {Cause} ({Severity}): {Text}")]
    public static partial void AlertTold(ILogger logger, LogLevel level, string bench, string what, string cause, string severity, string text);

    [LoggerMessage(EventId = 301, EventName = "AlertNotStored", Level = LogLevel.Error, Message = "{Bench}: alert {Alert} is told before it could be stored")]
    public static partial void AlertNotStored(ILogger logger, Exception error, string bench, int alert);

    [LoggerMessage(EventId = 302, EventName = "RouteFailed", Level = LogLevel.Error, Message = "Route {Route} could not tell alert {Alert} of {Bench}")]
    public static partial void RouteFailed(ILogger logger, Exception error, string route, string bench, int alert);

    [LoggerMessage(EventId = 303, EventName = "AlertDropped", Level = LogLevel.Error, Message = "{Bench}: change '{What}' of alert {Alert} was dropped by {Queue}, whose queue is full")]
    public static partial void AlertDropped(ILogger logger, string queue, string bench, int alert, string what);

    [LoggerMessage(EventId = 304, EventName = "RouteFailing", Level = LogLevel.Warning, Message = "Route {Route} failed ({Failures} in a row), tries again in {Seconds:F0} s: {Why}")]
    public static partial void RouteFailing(ILogger logger, string route, int failures, double seconds, string why);

    [LoggerMessage(EventId = 305, EventName = "RouteDown", Level = LogLevel.Error, Message = "Route {Route} is down, {Untold} changes untold: {Why}")]
    public static partial void RouteDown(ILogger logger, string route, int untold, string why);

    [LoggerMessage(EventId = 306, EventName = "RouteWorksAgain", Level = LogLevel.Information, Message = "Route {Route} works again")]
    public static partial void RouteWorksAgain(ILogger logger, string route);

    [LoggerMessage(EventId = 307, EventName = "AlertFlood", Level = LogLevel.Warning, Message = "Route {Route}: {Count} alerts within ten minutes; they are told in groups until it calms down")]
    public static partial void AlertFlood(ILogger logger, string route, int count);

    [LoggerMessage(EventId = 600, EventName = "LoopStuck", Level = LogLevel.Critical, Message = "No reading of {Benches} was handled for {Seconds:F0} s: they are not watched")]
    public static partial void LoopStuck(ILogger logger, string benches, double seconds);

    [LoggerMessage(EventId = 601, EventName = "PingFails", Level = LogLevel.Warning, Message = "The ping to {Place} fails: {Why}")]
    public static partial void PingFails(ILogger logger, string place, string why);

    [LoggerMessage(EventId = 602, EventName = "PingWorksAgain", Level = LogLevel.Information, Message = "The ping works again")]
    public static partial void PingWorksAgain(ILogger logger);

    [LoggerMessage(EventId = 603, EventName = "SettingsReloaded", Level = LogLevel.Information, Message = "{Path} was read again: {What}")]
    public static partial void SettingsReloaded(ILogger logger, string path, string what);

    [LoggerMessage(EventId = 604, EventName = "SettingsRefused", Level = LogLevel.Error, Message = "{Path} was changed but cannot be used, the settings in force stay: {Faults}")]
    public static partial void SettingsRefused(ILogger logger, string path, string faults);

    [LoggerMessage(EventId = 500, EventName = "CutOffTripped", Level = LogLevel.Critical, Message = "{Bench}: cut-off tripped by {Signature} (dry run: {DryRun})")]
    public static partial void CutOffTripped(ILogger logger, string bench, string signature, bool dryRun);

    [LoggerMessage(EventId = 501, EventName = "CutOffReset", Level = LogLevel.Warning, Message = "{Bench}: cut-off reset by {By}")]
    public static partial void CutOffReset(ILogger logger, string bench, string by);

    [LoggerMessage(EventId = 502, EventName = "CutOffNotReset", Level = LogLevel.Warning, Message = "{Bench}: cut-off not reset: {Why}")]
    public static partial void CutOffNotReset(ILogger logger, string bench, string why);

    [LoggerMessage(EventId = 503, EventName = "CutOffUnreachable", Level = LogLevel.Error, Message = "{Bench}: the cut-off at {Place} cannot be reached")]
    public static partial void CutOffUnreachable(ILogger logger, Exception error, string bench, string place);

    [LoggerMessage(EventId = 504, EventName = "CutOffNotStored", Level = LogLevel.Error, Message = "{Bench}: the state of the cut-off could not be stored")]
    public static partial void CutOffNotStored(ILogger logger, Exception error, string bench);

    [LoggerMessage(EventId = 110, EventName = "SoakResumed", Level = LogLevel.Warning, Message = "{Bench}: carries on run {Earlier}, left off at {LeftOffSeconds:F0} s, now at {NowSeconds:F0} s")]
    public static partial void SoakResumed(ILogger logger, string bench, string earlier, double leftOffSeconds, double nowSeconds);
}
