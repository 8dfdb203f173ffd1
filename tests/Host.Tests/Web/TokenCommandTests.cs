using Lampwarden.Host.Commands;
using Lampwarden.Host.Web.Access;

namespace Lampwarden.Host.Tests.Web;

public sealed class TokenCommandTests : IDisposable
{
    private readonly DirectoryInfo _folder = Directory.CreateTempSubdirectory("lampwarden-token-");

    public void Dispose() => _folder.Delete(recursive: true);

    [Fact]
    public async Task Token_NewFile_HoldsATokenThatOnlyItsOwnerReads_AndIsNotPrinted()
    {
        var path = Path.Combine(_folder.FullName, "page.token");
        using var output = new StringWriter();

        Assert.Equal(0, await CommandLine.RunAsync(["token", path], output, output));

        var text = (await File.ReadAllTextAsync(path, TestContext.Current.CancellationToken)).Trim();
        Assert.True(PageToken.Read(path).Matches(text));
        Assert.DoesNotContain(text, output.ToString(), StringComparison.Ordinal);
        if (!OperatingSystem.IsWindows())
        {
            Assert.Equal(UnixFileMode.UserRead | UnixFileMode.UserWrite, File.GetUnixFileMode(path));
        }
    }

    [Fact]
    public async Task Token_FileThatIsThere_IsLeftAlone()
    {
        var path = Path.Combine(_folder.FullName, "page.token");
        await File.WriteAllTextAsync(path, "in use", TestContext.Current.CancellationToken);
        using var output = new StringWriter();

        Assert.Equal(2, await CommandLine.RunAsync(["token", path], output, output));
        Assert.Equal("in use", await File.ReadAllTextAsync(path, TestContext.Current.CancellationToken));
    }
}
