using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;

namespace Lampwarden.Host.Soaking;

/// <summary>What people do while it soaks: asked from any thread, carried out by the soak's loop.</summary>
public sealed partial class Soak
{
    /// <summary>Somebody does something about an alert. Safe from any thread; carried out by the soak's loop.</summary>
    /// <param name="decision">Given the book and the seconds of the run.</param>
    /// <returns>The change; null where there was nothing to change, or the soak is over.</returns>
    public Task<AlertChange?> DecideAsync(Func<AlertBook, double, AlertChange?> decision) => AskAsync(soak =>
    {
        var change = decision(soak._alerts, soak._ledger.LastSeconds);
        soak.Publish(change);
        return change;
    });

    /// <summary>
    /// Somebody changed something on the bench: the watch is told, and a note of the run says so. Safe from any thread;
    /// carried out by the soak's loop, which does not wait for the note.
    /// </summary>
    /// <returns>False where no run is under way.</returns>
    public async Task<bool> AnnounceAsync(Announcement what)
    {
        var noted = await AskAsync(soak =>
        {
            if (soak._recorder is null)
            {
                return null;
            }

            soak.Announce(what);
            return soak.NoteAsync(AnnouncementWords.Note(what), soak._ledger.LastSeconds);
        });
        if (noted is null)
        {
            return false;
        }

        await noted;
        return true;
    }

    /// <summary>The next lamp of the bring-up is in, whatever the current says; or the bring-up is left as it is.</summary>
    /// <returns>False where there is no such step.</returns>
    public Task<bool> AdvanceBringUpAsync(bool leave) => AskAsync(soak =>
        soak._recorder is not null && soak._bringUp is { } bringUp && soak.Follow(leave ? bringUp.Leave() : bringUp.Confirm(soak._ledger.LastSeconds)));

    private async Task<T?> AskAsync<T>(Func<Soak, T> work)
    {
        var answer = new TaskCompletionSource<T?>(TaskCreationOptions.RunContinuationsAsynchronously);
        var asked = _inputs.Writer.TryWrite(new SoakInput(null, default, soak => answer.TrySetResult(work(soak))));
        return asked ? await answer.Task : default;
    }
}
