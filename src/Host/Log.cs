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

    [LoggerMessage(EventId = 200, EventName = "MeterIdentified", Level = LogLevel.Information, Message = "{Bench}: meter {Meter} says it is {Identity}")]
    public static partial void MeterIdentified(ILogger logger, string bench, string meter, string identity);

    [LoggerMessage(EventId = 201, EventName = "MeterGap", Level = LogLevel.Warning, Message = "{Bench}: meter {Meter} gives no reading ({Reason}): {Detail}")]
    public static partial void MeterGap(ILogger logger, string bench, string meter, string reason, string? detail);

    [LoggerMessage(EventId = 202, EventName = "MeterRecovered", Level = LogLevel.Information, Message = "{Bench}: meter {Meter} reads again after {Seconds:F1} s")]
    public static partial void MeterRecovered(ILogger logger, string bench, string meter, double seconds);

    [LoggerMessage(EventId = 300, EventName = "AlertTold", Message = "{Bench}: alert {What}: {Signature} ({Severity}): {Text}")]
    public static partial void AlertTold(ILogger logger, LogLevel level, string bench, string what, string signature, string severity, string text);

    [LoggerMessage(EventId = 301, EventName = "AlertNotStored", Level = LogLevel.Error, Message = "{Bench}: alert {FindingNumber} is told before it could be stored")]
    public static partial void AlertNotStored(ILogger logger, Exception error, string bench, int findingNumber);

    [LoggerMessage(EventId = 302, EventName = "RouteFailed", Level = LogLevel.Error, Message = "Route {Route} could not tell alert {FindingNumber} of {Bench}")]
    public static partial void RouteFailed(ILogger logger, Exception error, string route, string bench, int findingNumber);
}
