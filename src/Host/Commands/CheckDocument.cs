namespace Lampwarden.Host.Commands;

/// <summary>What <c>check --json</c> prints; property names are contract.</summary>
/// <param name="Meters">Every configured meter, in the order of the file.</param>
/// <param name="Ports">Serial ports this computer has, the names that survive replugging first.</param>
internal sealed record CheckDocument(IReadOnlyList<MeterCheck> Meters, IReadOnlyList<string> Ports);

/// <summary>How one meter did.</summary>
/// <param name="Name">As configured.</param>
/// <param name="Bench">Its bench.</param>
/// <param name="Ok">All the readings asked for came, without a gap once they had begun.</param>
/// <param name="Identity">Its answer to *IDN?; null where it has none.</param>
/// <param name="Readings">In A or V; NaN (null in JSON) for an overload.</param>
/// <param name="RatePerSecond">Readings a second that came.</param>
/// <param name="JitterMs">Standard deviation of the time between them.</param>
/// <param name="LatencyMs">Mean time from question to answer.</param>
/// <param name="Problems">What a person should know, in sentences.</param>
internal sealed record MeterCheck(
    string Name,
    string Bench,
    bool Ok,
    string? Identity,
    IReadOnlyList<double> Readings,
    double RatePerSecond,
    double JitterMs,
    double LatencyMs,
    IReadOnlyList<string> Problems);
