namespace Lampwarden.Host.Alerting;

/// <summary>An alert with what it waits for. Owned by its book.</summary>
internal sealed class AlertEntry(Alert alert)
{
    /// <summary>As it is told.</summary>
    public Alert Alert { get; set; } = alert;

    /// <summary>When a warning has stood long enough to be raised; NaN where it does not wait.</summary>
    public double OnDueSeconds { get; set; } = double.NaN;

    /// <summary>When a condition has been gone long enough; NaN where it does not wait.</summary>
    public double OffDueSeconds { get; set; } = double.NaN;

    /// <summary>When it is told again; NaN for never.</summary>
    public double RepeatDueSeconds { get; set; } = double.NaN;

    /// <summary>Waits for its on-delay, so nobody knows of it yet.</summary>
    public bool IsPending => !double.IsNaN(OnDueSeconds);

    /// <summary>Its condition is gone, so the next condition of this cause is the same alert come back.</summary>
    public bool CanComeBack => !Alert.Standing && Alert.IsOpen && !IsPending;
}
