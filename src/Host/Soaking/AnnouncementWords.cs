using System.Diagnostics;
using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Soaking;

/// <summary>How what a person told the watch is named on the wire and written into the record.</summary>
public static class AnnouncementWords
{
    private static readonly (string Name, AnnouncementKind Kind)[] Kinds =
    [
        ("load-changed", AnnouncementKind.LoadChanged),
        ("lamp-switched", AnnouncementKind.LampSwitched),
        ("cycles-by-itself", AnnouncementKind.CyclesByItself),
        ("meter-changed", AnnouncementKind.MeterChanged),
    ];

    /// <summary>Every name, for a message that says what is expected.</summary>
    public static string Names { get; } = string.Join(", ", Kinds.Select(kind => kind.Name));

    /// <summary>The kind of a name such as load-changed.</summary>
    /// <returns>Null for a name that is none of <see cref="Names"/>, or is missing.</returns>
    public static AnnouncementKind? KindOf(string? name)
    {
        var index = Array.FindIndex(Kinds, kind => kind.Name == name);
        return index < 0 ? null : Kinds[index].Kind;
    }

    /// <summary>The name of a kind.</summary>
    public static string NameOf(AnnouncementKind kind) => Array.Find(Kinds, one => one.Kind == kind).Name;

    /// <summary>The note that keeps an announcement with the run: what was done, then the person's own words.</summary>
    public static string Note(Announcement what)
    {
        var done = what.Kind switch
        {
            AnnouncementKind.LoadChanged => "the load was changed",
            AnnouncementKind.LampSwitched => "a lamp was switched",
            AnnouncementKind.CyclesByItself => "the unit switches by itself",
            AnnouncementKind.MeterChanged => "the meter's range was changed",
            _ => throw new UnreachableException(),
        };
        return string.IsNullOrEmpty(what.Detail) ? $"Told the watch: {done}." : $"Told the watch: {done}. {what.Detail}";
    }
}
