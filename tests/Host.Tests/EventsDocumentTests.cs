using System.Globalization;
using System.Reflection;
using Microsoft.Extensions.Logging;

namespace Lampwarden.Host.Tests;

/// <summary>People filter on event ids and names: docs/events.md lists every one of them as it is.</summary>
public sealed class EventsDocumentTests
{
    private static readonly LoggerMessageAttribute[] Events =
    [
        .. typeof(ReferencesTests).Assembly.GetReferencedAssemblies()
            .Where(name => name.Name == "lampwarden").Select(Assembly.Load)
            .SelectMany(assembly => assembly.GetTypes())
            .SelectMany(type => type.GetMethods(BindingFlags.Static | BindingFlags.Public | BindingFlags.NonPublic))
            .Select(method => method.GetCustomAttribute<LoggerMessageAttribute>()).OfType<LoggerMessageAttribute>(),
    ];

    [Fact]
    public void Ids_OfAllEvents_AreUniqueAndNamed()
    {
        Assert.NotEmpty(Events);
        Assert.Equal(Events.Length, Events.Select(one => one.EventId).Distinct().Count());
        Assert.Equal(Events.Length, Events.Select(one => one.EventName).Distinct().Count());
        Assert.All(Events, one => Assert.False(string.IsNullOrEmpty(one.EventName)));
    }

    [Fact]
    public void Document_OfEvents_ListsEachAsItIs()
    {
        var folder = new DirectoryInfo(AppContext.BaseDirectory);
        while (!File.Exists(Path.Combine(folder.FullName, "Lampwarden.slnx")))
        {
            folder = folder.Parent ?? throw new InvalidOperationException("The tests must run inside the repository.");
        }

        var rows = File.ReadAllLines(Path.Combine(folder.FullName, "docs", "events.md")).Where(line => line.StartsWith("| ", StringComparison.Ordinal)).Skip(2).ToHashSet();
        var expected = Events.OrderBy(one => one.EventId).Select(one => string.Create(
            CultureInfo.InvariantCulture,
            $"| {one.EventId} | {one.EventName} | {((int)one.Level is < 0 or (int)LogLevel.None ? "Varies" : one.Level)} | {one.Message.Replace("|", "\\|", StringComparison.Ordinal)} |")).ToHashSet();
        Assert.Empty(expected.Except(rows));
        Assert.Empty(rows.Except(expected));
    }
}
