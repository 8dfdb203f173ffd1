using Lampwarden.Host.Soaking;
using Microsoft.AspNetCore.Http.HttpResults;

namespace Lampwarden.Host.Web.Api;

/// <summary>The benches by name.</summary>
internal sealed class Desks(IReadOnlyList<BenchDesk> desks)
{
    public IReadOnlyList<BenchDesk> All => desks;

    public BenchDesk? Find(string bench) => desks.FirstOrDefault(desk => desk.Name == bench);

    public static ProblemHttpResult Missing(string bench) => Problems.NotFound("bench", bench, "GET /api/benches lists those there are.");
}
