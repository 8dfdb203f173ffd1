namespace Lampwarden.Analysis.Lamps;

/// <summary>The lamps a shop has, by name, whatever the case. Immutable and thread-safe.</summary>
public sealed class LampInventory
{
    private readonly Dictionary<string, Lamp> lamps = new(StringComparer.OrdinalIgnoreCase);

    /// <exception cref="ArgumentException">Two lamps share a name.</exception>
    public LampInventory(IEnumerable<Lamp> lamps)
    {
        foreach (var lamp in lamps)
        {
            if (!this.lamps.TryAdd(lamp.Name, lamp))
            {
                throw new ArgumentException($"Two lamps are called '{lamp.Name}'; give each its own name.", nameof(lamps));
            }
        }
    }

    /// <summary>No lamps.</summary>
    public static LampInventory Empty { get; } = new([]);

    /// <summary>The names, in the order given.</summary>
    public IReadOnlyCollection<string> Names => lamps.Keys;

    /// <summary>The lamp of a name.</summary>
    public bool TryGet(string name, out Lamp lamp) => lamps.TryGetValue(name, out lamp!);
}
