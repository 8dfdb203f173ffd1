using System.CommandLine;
using Lampwarden.Host.Web.Access;

namespace Lampwarden.Host.Commands;

/// <summary><c>token</c>: makes the secret that opens the page from other machines, in a file that only its owner can read.</summary>
internal sealed class TokenCommand : CliCommand
{
    private readonly Argument<string> _file = new("FILE") { Description = "File to make; it must not be there yet" };

    public TokenCommand()
        : base("token", "Make a token for the page, to be named by web.tokenFile")
    {
        Add(_file);
    }

    protected override async Task<int> RunAsync(ParseResult parsed, Terminal terminal, CancellationToken cancellation)
    {
        var path = Path.GetFullPath(parsed.GetValue(_file)!);
        if (File.Exists(path))
        {
            throw new BadInputException($"{path} is there already; a token in use would be lost. Name another file, or delete this one first.");
        }

        var options = new FileStreamOptions { Mode = FileMode.CreateNew, Access = FileAccess.Write };
        if (!OperatingSystem.IsWindows())
        {
            options.UnixCreateMode = UnixFileMode.UserRead | UnixFileMode.UserWrite;
        }

        await using (var file = new StreamWriter(path, options))
        {
            await file.WriteLineAsync(PageToken.Make().AsMemory(), cancellation);
        }

        // The token itself is not printed: terminals are scrolled back, logged and photographed.
        terminal.Prose.WriteLine($"A token is in {path}. Name it in the configuration: \"web\": {{ \"tokenFile\": \"{path.Replace("\\", "/", StringComparison.Ordinal)}\" }}");
        if (terminal.WantsJson)
        {
            terminal.WriteJson(new { tokenFile = path });
        }

        return ExitCode.Done;
    }
}
