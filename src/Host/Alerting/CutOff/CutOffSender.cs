using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Alerting.CutOff;

/// <summary>Sends one bench's texts to its contactor, each within a deadline, and tells people when the contactor does not answer.</summary>
/// <param name="output">The wire; null in a dry run, where everything counts as sent.</param>
/// <param name="bench">Whose contactor.</param>
/// <param name="around">Whom to tell.</param>
/// <param name="logger">For structured events.</param>
internal sealed class CutOffSender(ICutOffOutput? output, string bench, CutOffSurroundings around, ILogger logger) : IAsyncDisposable
{
    private static readonly TimeSpan Deadline = TimeSpan.FromSeconds(2);

    private bool _unreachable;

    /// <summary>Sends a text and, where one is asked for, waits for its answer.</summary>
    /// <param name="text">With \n, \r and \t written out.</param>
    /// <param name="answer">What must come back; null for nothing.</param>
    /// <param name="severity">How bad it is that it cannot be sent.</param>
    /// <param name="stop">Ends the waiting.</param>
    /// <returns>False where the contactor was not reached, or did not answer.</returns>
    public async Task<bool> TrySendAsync(string text, string? answer, Severity severity, CancellationToken stop)
    {
        if (output is null)
        {
            return true;
        }

        using var deadline = CancellationTokenSource.CreateLinkedTokenSource(stop);
        deadline.CancelAfter(Deadline);
        try
        {
            await output.SendAsync(Unescape(text), answer, deadline.Token).WaitAsync(deadline.Token);
            if (_unreachable)
            {
                _unreachable = false;
                around.Clear(AlertCauses.CutOffDown, Subject);
            }

            return true;
        }
        catch (Exception error) when (error is IOException || (error is OperationCanceledException && !stop.IsCancellationRequested))
        {
            if (!_unreachable)
            {
                _unreachable = true;
                Log.CutOffUnreachable(logger, error, bench, output.Place);
                around.Raise(AlertCauses.CutOffDown, severity,
                    $"{Subject}: the cut-off at {output.Place} does not answer ({error.Message}). It is tried again, without end.");
            }

            return false;
        }
    }

    /// <inheritdoc/>
    public ValueTask DisposeAsync() => output?.DisposeAsync() ?? ValueTask.CompletedTask;

    private string Subject => $"'{bench}'";

    private static string Unescape(string text) => text.Replace("\\n", "\n").Replace("\\r", "\r").Replace("\\t", "\t");
}
