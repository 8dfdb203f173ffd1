using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Reporting.Pictures;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Reporting;

/// <summary>Gathers what a report says about one run.</summary>
public static partial class ReportBuilder
{
    private const int TraceBuckets = 1200;
    private const double StartSeconds = 60;

    /// <summary>The content of a run's report.</summary>
    /// <param name="made">When it is made.</param>
    /// <exception cref="StoreException">There is no such run, or its readings are damaged.</exception>
    public static ReportContent Build(SoakStore store, string run, DateTimeOffset made)
    {
        var record = store.Run(run);
        record = record with { Gaps = Silences.AllGaps(store, record) };
        var figures = RunFigures.Of(store, run);
        var sections = new List<ReportSection>
        {
            new("The whole soak", [Trace(store, record, figures.HasSwitchOn ? 0 : figures.StartSeconds, double.PositiveInfinity, 0.42, TraceCaption(record))]),
            Circumstances(record),
            PredictedAndSeen(store, record, figures),
        };
        if (figures.HasSwitchOn)
        {
            sections.Add(new("Switch-on", [Trace(store, record, 0, Math.Min(StartSeconds, Math.Max(1, figures.LengthSeconds)), 0.3, "The first minute, every reading: the inrush through cold filaments and its fall.")]));
        }

        sections.Add(Findings(record));
        if (record.AlertChanges.Count > 0)
        {
            sections.Add(Alerts(record));
        }

        sections.Add(Gaps(record));
        sections.AddRange(Notes(record));
        sections.Add(SignOff(store, record));
        sections.Add(Cautions());
        sections.Add(HowToCheck(record));
        sections.AddRange(Attachments(store, record));
        return new ReportContent(
            run, "Soak record", Subtitle(record), record.Info.Verdict?.Text().ToUpperInvariant() ?? "GOING ON", record.Reasons,
            sections, ReadingsDigest.Of(store, run), Product.NameAndVersion, made);
    }

    private static string Subtitle(RunRecord record)
    {
        var unit = record.Info.UnitLabel is { } label ? $"{label}: {record.Info.Unit}" : record.Info.Unit;
        return $"{unit}, soaked behind {record.Info.Bank} on {record.Info.Mains}. Run {record.Info.Run}, bench {record.Info.Bench}.";
    }

    private static ReportPicture Trace(SoakStore store, RunRecord record, double from, double to, double height, string caption)
    {
        var window = store.Window(record.Info.Run, from, to, TraceBuckets) with { Gaps = record.Gaps };
        var marks = new TraceMarks(
            Said.Within(record.PredictionJson, "band", "lowAmps"), Said.Within(record.PredictionJson, "band", "highAmps"),
            Said.Within(record.PredictionJson, "steady", "lineAmps"),
            [.. record.Findings.Select(finding => (finding.OnsetSeconds, $"{finding.Number}"))]);
        return new ReportPicture(new TracePicture(window, marks), height, caption);
    }

    private static string TraceCaption(RunRecord record)
    {
        var band = double.IsFinite(Said.Within(record.PredictionJson, "band", "lowAmps"))
            ? "Dashed: the band a healthy unit should stay in; dotted: the predicted steady current. "
            : "";
        return $"Black: mean; grey: smallest to largest reading. {band}Hatched: no readings. Numbers: onset of the findings below.";
    }

    private static ReportSection Findings(RunRecord record)
    {
        if (record.Findings.Count == 0)
        {
            return new("Findings", [new ReportText("None: no fault signature was seen from switch-on to the end.")]);
        }

        return new("Findings", [new ReportTable(
            ["no.", "signature", "severity", "began", "raised", "cleared", "what is seen and what to look at first"],
            [0.055, 0.185, 0.095, 0.09, 0.09, 0.09, 0.495],
            [.. record.Findings.Select(finding => (IReadOnlyList<string>)
                [$"{finding.Number}", finding.Signature.Text(), finding.Severity.Text(), Said.At(finding.OnsetSeconds), Said.At(finding.RaisedSeconds),
                    finding.ClearedSeconds is { } cleared ? Said.At(cleared) : "stands", finding.Explanation])],
            new HashSet<int>()),
            new ReportText("Times are hours:minutes:seconds since switch-on. The onset is estimated; a signature is a hint where to look, not a diagnosis.", Small: true)]);
    }

    private static ReportSection Alerts(RunRecord record) => new("How alerts were handled", [new ReportTable(
        ["at", "wall time (UTC)", "alert", "what happened", "state after it", "by"],
        [0.1, 0.2, 0.12, 0.18, 0.24, 0.16],
        [.. record.AlertChanges.Select(change => (IReadOnlyList<string>)
            [Said.At(change.Seconds), change.Utc.UtcDateTime.ToString("yyyy-MM-dd HH:mm:ss", System.Globalization.CultureInfo.InvariantCulture),
                change.Alert, change.Transition, Said.Words(change.State), change.By ?? "watch"])],
        new HashSet<int>())]);

    private static ReportSection Gaps(RunRecord record)
    {
        if (record.Gaps.Count == 0)
        {
            return new("Time without readings", [new ReportText("None: every poll from switch-on to the end brought a reading.")]);
        }

        const int most = 20;
        var rows = record.Gaps.OrderByDescending(gap => gap.ToSeconds - gap.FromSeconds).Take(most).OrderBy(gap => gap.FromSeconds);
        var total = record.Gaps.Sum(gap => gap.ToSeconds - gap.FromSeconds);
        var share = Said.Number(100 * total / Math.Max(record.Info.LengthSeconds, 1e-3), "0.00", "%");
        var blocks = new List<ReportBlock>
        {
            new ReportText($"{(record.Gaps.Count == 1 ? "One gap" : $"{record.Gaps.Count} gaps")}, {Said.Length(total)} in all ({share} of the run). A fault that came and went within a gap would not have been seen."),
            new ReportTable(
                ["from", "to", "length", "reason", "what was seen"], [0.1, 0.1, 0.14, 0.18, 0.48],
                [.. rows.Select(gap => (IReadOnlyList<string>)
                    [Said.At(gap.FromSeconds), Said.At(gap.ToSeconds), Said.Length(gap.ToSeconds - gap.FromSeconds), gap.Reason, gap.Detail ?? ""])],
                new HashSet<int>()),
        };
        if (record.Gaps.Count > most)
        {
            blocks.Add(new ReportText($"The {most} longest are listed; the record holds all.", Small: true));
        }

        return new("Time without readings", blocks);
    }

    private static IEnumerable<ReportSection> Notes(RunRecord record)
    {
        if (record.Notes.Count > 0)
        {
            yield return new("Notes", [new ReportList([.. record.Notes.Select(note =>
                $"{(note.AtSeconds is { } at ? $"at {Said.At(at)}: " : "")}{note.Text}{(note.Author is { } author ? $" ({author})" : "")}")])]);
        }
    }

    private static IEnumerable<ReportSection> Attachments(SoakStore store, RunRecord record)
    {
        if (record.Attachments.Count == 0)
        {
            yield break;
        }

        var blocks = new List<ReportBlock>();
        foreach (var attachment in record.Attachments)
        {
            var told = $"{attachment.Name}, kept {Said.Utc(attachment.Utc)}, SHA-256 {attachment.Sha256}";
            blocks.Add(attachment.MediaType is "image/jpeg" or "image/png"
                ? new ReportPhoto(store.Attachment(record.Info.Run, attachment.Name), attachment.MediaType, told)
                : new ReportText(told, Small: true));
        }

        yield return new("Attachments", blocks);
    }

    private static ReportSection SignOff(SoakStore store, RunRecord record) =>
        new("Checked", [store.Signature(record.Info.Run) is var (name, utc)
            ? new ReportSignature(name, Said.Utc(utc))
            : new ReportSignature(null, null)]);
}
