using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Recording.Packing;
using Lampwarden.Host.Recording.Writing;

namespace Lampwarden.Host.Recording;

public sealed partial class SoakStore
{
    /// <summary>The reason given to a run that a kill or a power cut ended.</summary>
    public const string InterruptedReason =
        "The recording was interrupted before the run's end (the program was killed or the power failed): what is stored reaches up to the last second before that.";

    /// <summary>
    /// The run that this opening found interrupted on a bench, if the same unit stands behind the same bank now. Given once:
    /// the first run begun there carries it on, the next is a new soak.
    /// </summary>
    /// <returns>Null where there is none.</returns>
    public string? TakeInterrupted(RunStart next)
    {
        lock (_resumable)
        {
            var run = _resumable.FirstOrDefault(run => (run.Bench, run.Unit, run.UnitLabel, run.Bank, run.Mains) == (next.Bench, next.Unit, next.UnitLabel, next.Bank, next.Mains));
            _resumable.RemoveAll(other => other.Bench == next.Bench);
            return run?.Run;
        }
    }

    private readonly List<RunInfo> _resumable = [];

    // Only the holder of the folder's lock comes here, so a run without an end is nobody's.
    private void CloseInterrupted()
    {
        var open = Runs().Where(run => run.EndedUtc is null).ToList();
        foreach (var info in open)
        {
            var run = Reload(info.Run);
            DoAsync(
                batch =>
                {
                    run.End = new RunEnd(Verdict.Incomplete, [InterruptedReason]);
                    batch.Touched.Add(run);
                },
                CancellationToken.None).GetAwaiter().GetResult();
        }

        Interrupted = [.. open.Select(info => Run(info.Run).Info)];
        _resumable.AddRange(Interrupted);
    }

    /// <summary>A run as its writer left it: what lies in short chunks is packed when it is closed.</summary>
    private ActiveRun Reload(string id)
    {
        var run = new ActiveRun { Key = KeyOf(id), Id = id };
        using var reader = new StoreReader(_file);
        run.Entries = reader.Count(run.Key, "SELECT coalesce(sum(count),0) FROM chunks WHERE run=$run");
        try
        {
            foreach (var chunk in reader.ShortChunks(run.Key))
            {
                run.Tail.AddRange(ReadingChunk.Unpack(chunk.Data));
            }
        }
        catch (InvalidDataException)
        {
            // Left as they are: what is whole among them is still read one by one, and the damaged one says so.
            run.Tail.Clear();
        }

        return run;
    }
}
