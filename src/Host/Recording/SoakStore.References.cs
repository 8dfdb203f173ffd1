using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Recording;

public sealed partial class SoakStore
{
    /// <summary>Names a passed run the reference of a unit model, in place of the one before.</summary>
    /// <exception cref="StoreException">There is no such run, it has not passed, or it cannot be stored.</exception>
    public Task SetReferenceAsync(string model, string run, CancellationToken cancellationToken = default)
    {
        if (Run(run).Info.Verdict != Verdict.Passed)
        {
            throw new StoreException($"Run {run} has not passed, so it cannot be the reference of '{model}'. Choose a passed run ('lampwarden runs --verdict passed').");
        }

        var (key, utc) = (KeyOf(run), _time.GetUtcNow().ToUnixTimeMilliseconds());
        return DoAsync(batch => batch.Run("INSERT OR REPLACE INTO reference_units (model, run, utc_ms) VALUES (?,?,?)", model, key, utc), cancellationToken);
    }

    /// <summary>The run that is the reference of a unit model; null for none.</summary>
    public string? Reference(string model) => Read(reader => reader.List(
        "SELECT runs.id FROM reference_units JOIN runs ON runs.run=reference_units.run WHERE model=$model",
        row => row.GetString(0),
        ("$model", model)).FirstOrDefault());

    /// <summary>The unit models whose reference a run is.</summary>
    public IReadOnlyList<string> ReferenceModels(string run) => Read(reader => reader.List(
        "SELECT model FROM reference_units WHERE run=$run ORDER BY model", row => row.GetString(0), ("$run", KeyOf(run))));

    /// <summary>Puts a typed name under a run's report.</summary>
    /// <exception cref="StoreException">There is no such run, or it cannot be stored.</exception>
    public Task SignAsync(string run, string name, CancellationToken cancellationToken = default)
    {
        var (key, utc) = (KeyOf(run), _time.GetUtcNow().ToUnixTimeMilliseconds());
        return DoAsync(batch => batch.Run("UPDATE runs SET signed_by=?, signed_ms=? WHERE run=?", name, utc, key), cancellationToken);
    }

    /// <summary>Who signed a run and when; null where nobody has.</summary>
    public (string Name, DateTimeOffset Utc)? Signature(string run) => Read(reader => reader.List<(string, DateTimeOffset)?>(
        "SELECT signed_by, signed_ms FROM runs WHERE run=$run AND signed_by IS NOT NULL",
        row => (row.GetString(0), RunRows.Utc(row.GetInt64(1))),
        ("$run", KeyOf(run))).FirstOrDefault());
}
