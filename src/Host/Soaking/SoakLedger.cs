using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Soaking;

/// <summary>
/// A watch with the counts and gaps around it. Live soak and offline replay both go through here, so the same
/// readings give the same document.
/// </summary>
public sealed class SoakLedger(WatchSettings settings)
{
    private readonly Watch _watch = new(settings);
    private readonly GapBook _gaps = new();

    /// <summary>The watch itself.</summary>
    public Watch Watch => _watch;

    /// <summary>Numbers and overloads taken.</summary>
    public long Readings { get; private set; }

    /// <summary>Polls without a reading.</summary>
    public long Missed { get; private set; }

    /// <summary>Seconds of the last observation.</summary>
    public double LastSeconds { get; private set; }

    /// <summary>The gap that the last observation ended, to be stored; null where it ended none.</summary>
    public Gap? EndedGap { get; private set; }

    /// <summary>Takes one observation; for a gap, with its reason.</summary>
    public IReadOnlyList<FindingChange> Take(in Observation observation, string reason = "")
    {
        LastSeconds = Math.Max(LastSeconds, observation.Seconds);
        if (observation.IsGap)
        {
            Missed++;
            EndedGap = _gaps.Missed(LastSeconds, reason);
        }
        else
        {
            Readings++;
            EndedGap = _gaps.Reading(LastSeconds);
        }

        return _watch.Observe(observation);
    }

    /// <summary>Closes the run and judges it.</summary>
    /// <param name="endSeconds">When it ended; not before the last observation.</param>
    /// <returns>What is to be written, and the judgement behind it.</returns>
    public (SoakDocument Document, Judgement Judgement) Close(double endSeconds)
    {
        endSeconds = Math.Max(endSeconds, LastSeconds);
        EndedGap = _gaps.End(endSeconds);
        var judgement = _watch.Judge(endSeconds);
        var summary = judgement.Summary.ToDictionary(pair => pair.Key, pair => (object)pair.Value);
        summary["reasons"] = judgement.Reasons;
        var document = new SoakDocument(Readings, _gaps.Gaps, [.. _watch.Findings.Select(FindingEntry.Of)], judgement.Verdict, summary);
        return (document, judgement);
    }
}
