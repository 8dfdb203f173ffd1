using Lampwarden.Analysis.Lamps;
using Lampwarden.Host.Recording;
using Lampwarden.Host.Soaking;
using Lampwarden.Host.Unattended;
using Lampwarden.Host.Web.Access;
using Lampwarden.Host.Web.Live;

namespace Lampwarden.Host.Web;

/// <summary>What the page shows and acts on.</summary>
/// <param name="Board">All benches at this moment.</param>
/// <param name="Desks">All benches, to be acted on.</param>
/// <param name="Store">Runs, past and present.</param>
/// <param name="Loggers">For the page's own log.</param>
/// <param name="Attendance">For the health and metrics endpoints; null for none.</param>
public sealed record PageParts(LiveBoard Board, IReadOnlyList<BenchDesk> Desks, SoakStore Store, ILoggerFactory Loggers, Attendance? Attendance = null);

/// <summary>How a command wants the page served.</summary>
/// <param name="Address">Checked address and token.</param>
/// <param name="Inventory">Lamps that bank texts may name.</param>
/// <param name="StaysOpen">Whether the service goes on when a soak ends, so that the next can be started from the page.</param>
/// <param name="MayFail">Whether the command goes on without its page where the address cannot be had.</param>
/// <param name="Prose">Where the command speaks to its user.</param>
public sealed record PageOrder(PageAddress Address, LampInventory Inventory, bool StaysOpen, bool MayFail, TextWriter Prose)
{
    internal async Task<IAsyncDisposable?> OpenAsync(PageParts parts)
    {
        try
        {
            var server = await PageServer.StartAsync(Address, Inventory, parts);
            await Prose.WriteLineAsync($"The page: {server.Url}");
            return server;
        }
        catch (IOException error) when (MayFail)
        {
            await Prose.WriteLineAsync($"No page: {Address.Url} cannot be had ({error.Message}). The rest goes on.");
            return null;
        }
        catch (IOException error)
        {
            throw new IOException($"the page cannot be served at {Address.Url}: {error.Message} Change web.address, or start with --no-page.", error);
        }
    }
}
