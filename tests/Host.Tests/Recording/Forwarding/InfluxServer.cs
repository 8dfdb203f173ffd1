using System.Net.Http.Headers;
using System.Text;
using System.Text.Json;

namespace Lampwarden.Host.Tests.Recording.Forwarding;

/// <summary>InfluxDB 1.x with authentication on: refuses malformed points with 400, keeps whole doubles, and has its log on disk before it answers.</summary>
internal sealed class InfluxServer() : ServerProcess("influxd")
{
    public const string Token = "shop:right-password";
    public const string Database = "soaks";

    private readonly int _rpcPort = FreePort();

    protected override string HealthPath => "/ping";

    /// <summary>The first start of all: makes the user and the database.</summary>
    public async Task PrepareAsync()
    {
        await StartAsync();
        await QueryAsync("CREATE USER shop WITH PASSWORD 'right-password' WITH ALL PRIVILEGES", post: true);
        Http.DefaultRequestHeaders.Authorization = new AuthenticationHeaderValue("Basic", Convert.ToBase64String(Encoding.UTF8.GetBytes(Token)));
        await QueryAsync($"CREATE DATABASE {Database}", post: true);
    }

    public async Task WriteAsync(string lines)
    {
        using var answer = await Http.PostAsync(new Uri($"{Url}/write?db={Database}&precision=ms"), new StringContent(lines));
        answer.EnsureSuccessStatusCode();
    }

    /// <summary>One field of one measurement: value by Unix milliseconds.</summary>
    public async Task<SortedDictionary<long, double>> ReadAsync(string field, string measurement, string run)
    {
        using var answer = JsonDocument.Parse(await QueryAsync($"SELECT {field} FROM {measurement} WHERE run='{run}'"));
        var found = new SortedDictionary<long, double>();
        var result = answer.RootElement.GetProperty("results")[0];
        if (result.TryGetProperty("series", out var series))
        {
            foreach (var row in series[0].GetProperty("values").EnumerateArray())
            {
                found[row[0].GetInt64()] = row[1].GetDouble();
            }
        }

        return found;
    }

    public async Task<string> QueryAsync(string query, bool post = false)
    {
        var address = new Uri($"{Url}/query?db={Database}&epoch=ms&q={Uri.EscapeDataString(query)}");
        using var answer = post ? await Http.PostAsync(address, null) : await Http.GetAsync(address);
        var text = await answer.Content.ReadAsStringAsync();
        Assert.True(answer.IsSuccessStatusCode, text);
        return text;
    }

    protected override string[] Arguments()
    {
        var file = Path.Combine(Folder.Path, "influx.conf");
        File.WriteAllText(file, $"""
            reporting-disabled = true
            bind-address = "127.0.0.1:{_rpcPort}"
            [meta]
              dir = "{Folder.Path}/meta"
            [data]
              dir = "{Folder.Path}/data"
              wal-dir = "{Folder.Path}/wal"
              query-log-enabled = false
            [monitor]
              store-enabled = false
            [http]
              bind-address = "127.0.0.1:{Port}"
              auth-enabled = true
              log-enabled = false
              max-row-limit = 0
            [logging]
              level = "error"
            """);
        return ["run", "-config", file];
    }
}
