using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording.Writing;

namespace Lampwarden.Host.Recording.Exchange;

/// <summary>Takes a carried run into a store.</summary>
public static class RunImport
{
    /// <summary>Stores a run that came from elsewhere. Its id is kept where it is free; otherwise it gets the next one of its day.</summary>
    /// <param name="bare">What is to be said of a run that comes as readings alone.</param>
    /// <returns>The run's id in this store.</returns>
    /// <exception cref="StoreException">It cannot be stored.</exception>
    public static async Task<string> ImportAsync(SoakStore store, CarriedRun carried, RunStart bare, CancellationToken cancellationToken = default)
    {
        var start = carried.Record is { Info: var info } record
            ? new RunStart
            {
                Bench = info.Bench, Unit = info.Unit, UnitLabel = info.UnitLabel, Bank = info.Bank, Mains = info.Mains,
                PlannedHours = info.PlannedHours, ConfigurationJson = record.ConfigurationJson, PredictionJson = record.PredictionJson,
                Software = info.Software, StartedUtc = info.StartedUtc, ResumedFrom = info.ResumedFrom,
            }
            : bare;
        var recorder = await store.BeginRunAsync(start, carried.Record?.Info.Run, cancellationToken);
        await AppendAsync(recorder, carried, cancellationToken);
        var end = carried.Record is { Info.Verdict: { } verdict } whole
            ? new RunEnd(verdict, whole.Reasons, whole.SummaryJson, whole.Info.LengthSeconds)
            : new RunEnd(Verdict.Incomplete, ["The readings were imported without a verdict. 'lampwarden replay' passes them through the watch."]);
        if (!await recorder.EndAsync(end, cancellationToken))
        {
            throw new StoreException(store.Health.Trouble ?? $"The run could not be stored in {store.FilePath}.");
        }

        foreach (var note in carried.Record?.Notes ?? [])
        {
            await store.AddNoteAsync(recorder.Run, note, cancellationToken);
        }

        foreach (var attachment in carried.Record?.Attachments ?? [])
        {
            if (carried.Attachments.TryGetValue(attachment.Name, out var bytes))
            {
                await store.AttachAsync(recorder.Run, attachment.Name, attachment.MediaType, bytes, attachment.Utc, cancellationToken);
            }
        }

        return recorder.Run;
    }

    // An import may wait for the disk, unlike a soak: what does not fit the queue is offered again after a flush.
    private static async Task AppendAsync(RunRecorder recorder, CarriedRun carried, CancellationToken cancellationToken)
    {
        var waiting = 0;
        foreach (var reading in carried.Readings)
        {
            // A series alone brings no reasons; the record of a whole run brings its gaps, and they are stored as they were.
            var taken = reading.IsMissing && carried.Record is null
                ? recorder.AppendMissed(reading.Seconds, "not-in-series")
                : recorder.Append(reading);
            if (++waiting >= 20_000 || !taken)
            {
                waiting = 0;
                if (!await recorder.FlushAsync(cancellationToken) || !taken)
                {
                    throw new StoreException("The readings could not be stored; the run is left unfinished.");
                }
            }
        }

        if (carried.Record is { } record)
        {
            recorder.AppendStored(record);
        }
    }
}
