using InfluxDB.Client.Api.Domain;
using InfluxDB.Client.Writes;
using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Recording.Forwarding;

/// <summary>
/// What is stored, as points. A point's identity (measurement, tags, time) depends on what is stored alone, so sending it
/// twice overwrites it with itself. Measurements, tags and fields are listed in docs/influx.md: keep it in step.
/// </summary>
internal static class InfluxPoints
{
    /// <summary>What every reading of a run begins with: the client's own escaping, done once.</summary>
    public static string ReadingHead(OutboxRun run)
    {
        var line = Line(Of("soak_reading", run, 0).Field("x", true));
        return line[..line.LastIndexOf(" x=", StringComparison.Ordinal)];
    }

    /// <summary>
    /// A reading as a line, put together here: through the client's point objects an hour's backlog took three times as long.
    /// InfluxDB knows no infinity: an overload is a field of its own and carries no number.
    /// </summary>
    public static string Reading(string head, long startedMs, in LineReading reading)
    {
        Span<char> room = stackalloc char[128];
        var culture = System.Globalization.CultureInfo.InvariantCulture;
        var time = startedMs + reading.Milliseconds;
        if (reading.IsMissing)
        {
            return string.Create(culture, room, $"{head} missed=true {time}");
        }

        return (double.IsFinite(reading.Amps), double.IsFinite(reading.MainsVolts)) switch
        {
            (true, false) => string.Create(culture, room, $"{head} amps={reading.Amps} {time}"),
            (true, true) => string.Create(culture, room, $"{head} amps={reading.Amps},volts={reading.MainsVolts} {time}"),
            (false, false) => string.Create(culture, room, $"{head} overload=true {time}"),
            (false, true) => string.Create(culture, room, $"{head} overload=true,volts={reading.MainsVolts} {time}"),
        };
    }

    public static string Begun(OutboxRun run, RunInfo info)
    {
        var point = Of("soak_run", run, run.StartedMs)
            .Field("unit", Clean(info.Unit)).Field("bank", Clean(info.Bank)).Field("mains", Clean(info.Mains)).Field("software", Clean(info.Software));
        point = info.UnitLabel is { } label ? point.Field("unit_label", Clean(label)) : point;
        return Line(double.IsFinite(info.PlannedHours) ? point.Field("planned_hours", info.PlannedHours) : point);
    }

    // At the same time as the beginning, so that one run is one point with more and more fields.
    public static string Ended(OutboxRun run, RunRecord record) => Line(Of("soak_run", run, run.StartedMs)
        .Field("verdict", record.Info.Verdict!.Value.Text())
        .Field("reasons", Clean(string.Join(" ", record.Reasons)))
        .Field("length_seconds", record.Info.LengthSeconds)
        .Field("readings", record.Info.Readings)
        .Field("lost", record.Info.Lost));

    public static string Finding(OutboxRun run, StoredFindingChange change)
    {
        var finding = change.Change.Finding;
        return Line(Of("soak_finding", run, run.StartedMs + (long)Math.Round(change.Seconds * 1000))
            .Tag("finding", FormattableString.Invariant($"{finding.Number}"))
            .Field("signature", finding.Signature.Text()).Field("severity", finding.Severity.Text())
            .Field("change", change.Change.Kind.ToString().ToLowerInvariant())
            .Field("onset_seconds", finding.OnsetSeconds)
            .Field("explanation", Clean(finding.Explanation)));
    }

    public static string Alert(OutboxRun run, StoredAlertChange change) => Line(Of("soak_alert", run, change.Utc.ToUnixTimeMilliseconds())
        .Tag("alert", Tag(change.Alert))
        .Field("transition", Clean(change.Transition)).Field("state", Clean(change.State)).Field("by", Clean(change.By ?? "watch"))
        .Field("text", Clean(change.Text ?? "")));

    private static PointData Of(string measurement, OutboxRun run, long utcMs) => PointData.Measurement(measurement)
        .Tag("bench", run.BenchTag).Tag("run", run.Id).Timestamp(utcMs, WritePrecision.Ms);

    private static string Line(PointData point) => point.ToLineProtocol();

    // Line protocol has no line breaks in values.
    private static string Clean(string text) => string.Concat(text.Select(letter => char.IsControl(letter) ? ' ' : letter));

    // An empty tag is not allowed, and a backslash at a tag's end would escape what follows it.
    internal static string Tag(string text) => Clean(text).TrimEnd('\\') is { Length: > 0 } tag ? tag : "unnamed";
}
