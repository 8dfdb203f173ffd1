using Lampwarden.Analysis.Watching;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Recording;

namespace Lampwarden.Host.Unattended;

/// <summary>Turns the store's trouble into an alert: what is read but not kept is a loss that a person must hear of.</summary>
public sealed class StoreWarden : IAsyncDisposable
{
    private static readonly TimeSpan Between = TimeSpan.FromSeconds(1);

    private readonly Func<StoreHealth> _store;
    private readonly AlertDispatch _dispatch;
    private readonly ITimer _timer;
    private long _refused;
    private bool _raised;

    /// <summary>Starts looking.</summary>
    public StoreWarden(Func<StoreHealth> store, AlertDispatch dispatch, TimeProvider time)
    {
        (_store, _dispatch) = (store, dispatch);
        _timer = time.CreateTimer(_ => Look(), null, Between, Between);
    }

    /// <inheritdoc/>
    public ValueTask DisposeAsync() => _timer.DisposeAsync();

    private void Look()
    {
        var health = _store();
        var lost = health.Refused - _refused;
        if (health.Trouble is { } trouble)
        {
            // Losses make it worse: the alert grows critical, and so is told again.
            _refused = health.Refused;
            _raised = true;
            _dispatch.Raise(AlertCauses.StoreTrouble, lost > 0 ? Severity.Critical : Severity.Warning,
                FormattableString.Invariant($"The record cannot be kept: {trouble} The watch goes on; {health.Waiting} entries wait, {health.Refused} are lost."));
        }
        else if (_raised)
        {
            _raised = false;
            _dispatch.Clear(AlertCauses.StoreTrouble);
        }
    }
}
