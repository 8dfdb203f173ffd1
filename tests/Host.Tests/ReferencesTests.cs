using System.Reflection;
using Lampwarden.Acquisition;
using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Tests;

/// <summary>The rule of the house: Analysis and Acquisition know neither each other nor the host.</summary>
public sealed class ReferencesTests
{
    [Theory]
    [InlineData(typeof(Observation))]
    [InlineData(typeof(MeterEvent))]
    public void Assembly_OfARoom_ReferencesNoOtherRoom(Type inRoom)
    {
        var own = inRoom.Assembly.GetName().Name;
        var ours = inRoom.Assembly.GetReferencedAssemblies()
            .Select(reference => reference.Name!)
            .Where(name => name != own && (name.StartsWith("Lampwarden", StringComparison.OrdinalIgnoreCase)))
            .ToList();
        Assert.Empty(ours);
    }

    [Theory]
    [InlineData("src/Analysis/Analysis.csproj")]
    [InlineData("src/Acquisition/Acquisition.csproj")]
    public void Project_OfARoom_NamesNoProject(string path)
    {
        // The compiler drops references that no type uses, so the assembly alone would not show one that waits to be used.
        var text = File.ReadAllText(Path.Combine(Repository.Root, path));
        Assert.DoesNotContain("ProjectReference", text, StringComparison.Ordinal);
    }

    [Fact]
    public void Analysis_ReadsNoClockAndNoFile()
    {
        var banned = new[] { "System.Console", "System.IO.FileSystem", "System.Net.Sockets", "Microsoft.Extensions.Logging.Abstractions" };
        var references = typeof(Observation).Assembly.GetReferencedAssemblies().Select(reference => reference.Name!);
        Assert.Empty(references.Intersect(banned));
    }
}
