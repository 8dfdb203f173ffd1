namespace Lampwarden.Benchmarks.Detection;

public enum FaultKind
{
    None,
    Creep,
    Short,
    Open,
    Runaway,
    Lamp,
    Arcing,
    Hiccup,
    Sag,
}

/// <summary>One fault class with one severity, and how long it may take to be found.</summary>
/// <param name="Size">Creep: share per hour. Short, lamp: share of the current. Runaway: time constant, s. Arcing: amplitude. Hiccup: period, s. Sag: depth.</param>
/// <param name="Second">Arcing: bursts a minute. Sag: seconds.</param>
public sealed record Fault(FaultKind Kind, double Size, double Second, double HorizonSeconds, string Name)
{
    public static readonly Fault Nothing = new(FaultKind.None, 0, 0, 0, "nominal");

    /// <summary>Every class and severity of the corpus.</summary>
    public static readonly IReadOnlyList<Fault> All =
    [
        new(FaultKind.Creep, 0.005, 0, 9 * 3600, "creep 0.5 %/h"),
        new(FaultKind.Creep, 0.01, 0, 9 * 3600, "creep 1 %/h"),
        new(FaultKind.Creep, 0.02, 0, 9 * 3600, "creep 2 %/h"),
        new(FaultKind.Creep, 0.05, 0, 5 * 3600, "creep 5 %/h"),
        new(FaultKind.Creep, 0.20, 0, 3 * 3600, "creep 20 %/h"),
        new(FaultKind.Runaway, 600, 0, 3 * 3600, "runaway 10 min"),
        new(FaultKind.Runaway, 1800, 0, 4 * 3600, "runaway 30 min"),
        new(FaultKind.Short, 0.03, 0, 1800, "short +3 %"),
        new(FaultKind.Short, 0.10, 0, 1800, "short +10 %"),
        new(FaultKind.Short, 0.30, 0, 1800, "short +30 %"),
        new(FaultKind.Short, 1.00, 0, 1800, "short +100 %"),
        new(FaultKind.Open, 1, 0, 1800, "open"),
        new(FaultKind.Lamp, 0.02, 0, 7200, "lamp -2 %"),
        new(FaultKind.Lamp, 0.05, 0, 7200, "lamp -5 %"),
        new(FaultKind.Lamp, 0.15, 0, 7200, "lamp -15 %"),
        new(FaultKind.Arcing, 0.15, 0.2, 7200, "arc 0.2/min 15 %"),
        new(FaultKind.Arcing, 0.15, 1, 7200, "arc 1/min 15 %"),
        new(FaultKind.Arcing, 0.40, 1, 7200, "arc 1/min 40 %"),
        new(FaultKind.Arcing, 0.40, 5, 7200, "arc 5/min 40 %"),
        new(FaultKind.Hiccup, 2, 0, 1800, "hiccup 2 s"),
        new(FaultKind.Hiccup, 6, 0, 1800, "hiccup 6 s"),
        new(FaultKind.Hiccup, 20, 0, 1800, "hiccup 20 s"),
        new(FaultKind.Sag, 0.07, 5, 900, "sag 7 % 5 s"),
        new(FaultKind.Sag, 0.07, 30, 900, "sag 7 % 30 s"),
    ];

    /// <summary>The classes of the second corpus; sizes are of the unit's load, and a lamp fault takes one lamp away.</summary>
    public static readonly IReadOnlyList<Fault> Physical =
    [
        .. All.Where(fault => fault.Kind is FaultKind.Creep or FaultKind.Runaway or FaultKind.Open or FaultKind.Arcing or FaultKind.Hiccup or FaultKind.Sag),
        new(FaultKind.Short, 0.10, 0, 1800, "load +10 %"),
        new(FaultKind.Short, 1.00, 0, 1800, "load +100 %"),
        new(FaultKind.Short, 100, 0, 1800, "dead short"),
        new(FaultKind.Lamp, 1, 0, 7200, "one lamp dark"),
    ];

    /// <summary>Excess over the healthy current u seconds after onset, for the kinds that change slowly or once.</summary>
    public double Excess(double u) => u < 0 ? 0 : Kind switch
    {
        FaultKind.Creep => Size * u / 3600,
        FaultKind.Runaway => 0.003 * (Math.Exp(Math.Min(u / Size, 50)) - 1),
        FaultKind.Short => Size,
        FaultKind.Open => -1,
        FaultKind.Lamp => -Size,
        _ => 0,
    };
}
