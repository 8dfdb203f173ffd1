namespace Lampwarden.Host;

internal static partial class Log
{
    [LoggerMessage(EventId = 400, EventName = "RunInterrupted", Level = LogLevel.Warning, Message = "{Bench}: run {Run} had been interrupted after {Seconds:F0} s and is closed as incomplete; its readings up to then are kept")]
    public static partial void RunInterrupted(ILogger logger, string bench, string run, double seconds);

    [LoggerMessage(EventId = 410, EventName = "ForwardingWaits", Level = LogLevel.Warning, Message = "Forwarding waits: {Why}")]
    public static partial void ForwardingWaits(ILogger logger, string why);

    [LoggerMessage(EventId = 411, EventName = "ForwardingGoesOn", Level = LogLevel.Information, Message = "Forwarding goes on")]
    public static partial void ForwardingGoesOn(ILogger logger);

    [LoggerMessage(EventId = 412, EventName = "ForwardingHalted", Level = LogLevel.Error, Message = "Forwarding has stopped until the service is started anew; the store keeps everything: {Why}")]
    public static partial void ForwardingHalted(ILogger logger, string why);

    [LoggerMessage(EventId = 413, EventName = "PointsParked", Level = LogLevel.Error, Message = "{Count} points of run {Run} are put aside, because the server will never take them: {Why}")]
    public static partial void PointsParked(ILogger logger, int count, string run, string why);
}
