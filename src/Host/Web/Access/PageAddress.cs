using System.Net;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Web.Access;

/// <summary>Where the page listens and what that asks for, checked before anything listens.</summary>
/// <param name="Url">Scheme, host and port.</param>
/// <param name="OnlyThisMachine">Nobody else can reach it.</param>
/// <param name="Token">Required of every request when there is one.</param>
public sealed record PageAddress(Uri Url, bool OnlyThisMachine, PageToken? Token)
{
    private const string HowToMakeOne =
        "make one with 'lampwarden token page.token', keep that file to yourself, and set web.tokenFile to it";

    /// <summary>Reads the page's part of the configuration.</summary>
    /// <param name="options">As configured.</param>
    /// <param name="source">The file it stands in, for the message.</param>
    /// <exception cref="ConfigurationException">The address is none, or can be reached from outside without a token, or the token cannot be used.</exception>
    public static PageAddress Of(WebOptions options, string source)
    {
        var faults = new List<Fault>();
        if (!Uri.TryCreate(options.Address, UriKind.Absolute, out var url) || url.Scheme != Uri.UriSchemeHttp || url.PathAndQuery != "/")
        {
            faults.Add(new Fault("web.address", options.Address, "expected http://, a host or an IP address, and a port, such as http://127.0.0.1:5080; "
                + "for https put a reverse proxy before it and set web.tokenFile"));
            throw new ConfigurationException(source, faults);
        }

        var token = ReadToken(options.TokenFile, faults);
        var onlyHere = IsThisMachine(url.Host);
        if (!onlyHere && options.TokenFile is null)
        {
            faults.Add(new Fault("web.tokenFile", null, $"web.address '{options.Address}' can be reached from other machines, so a token is required: {HowToMakeOne}"));
        }

        return faults.Count == 0 ? new PageAddress(url, onlyHere, token) : throw new ConfigurationException(source, faults);
    }

    /// <summary>Whether a host name or address can only mean the machine itself.</summary>
    public static bool IsThisMachine(string host) =>
        host.Equals("localhost", StringComparison.OrdinalIgnoreCase)
        || (IPAddress.TryParse(host.Trim('[', ']'), out var address) && IPAddress.IsLoopback(address));

    private static PageToken? ReadToken(string? path, List<Fault> faults)
    {
        if (path is null)
        {
            return null;
        }

        try
        {
            return PageToken.Read(path);
        }
        catch (FormatException error)
        {
            faults.Add(new Fault("web.tokenFile", path, error.Message));
        }
        catch (Exception error) when (error is IOException or UnauthorizedAccessException)
        {
            faults.Add(new Fault("web.tokenFile", path, $"cannot be read ({error.Message}); {HowToMakeOne}"));
        }

        return null;
    }
}
