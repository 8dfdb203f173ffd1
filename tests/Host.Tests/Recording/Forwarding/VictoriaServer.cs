using System.Text.Json;

namespace Lampwarden.Host.Tests.Recording.Forwarding;

/// <summary>VictoriaMetrics: takes the v2 write path as it is. It drops malformed lines silently and keeps about 13 digits.</summary>
internal sealed class VictoriaServer() : ServerProcess("victoria-metrics")
{
    protected override string HealthPath => "/health";

    /// <summary>One field of one measurement: value by Unix milliseconds.</summary>
    public async Task<SortedDictionary<long, double>> ReadAsync(string measurementAndField, string run)
    {
        await Http.GetStringAsync(new Uri(Url + "/internal/force_flush"));
        var text = await Http.GetStringAsync(new Uri($"{Url}/api/v1/export?match[]={Uri.EscapeDataString($"{measurementAndField}{{run=\"{run}\"}}")}"));
        var found = new SortedDictionary<long, double>();
        foreach (var line in text.Split('\n', StringSplitOptions.RemoveEmptyEntries))
        {
            using var series = JsonDocument.Parse(line);
            foreach (var (time, value) in series.RootElement.GetProperty("timestamps").EnumerateArray().Zip(series.RootElement.GetProperty("values").EnumerateArray()))
            {
                found[time.GetInt64()] = value.GetDouble();
            }
        }

        return found;
    }

    protected override string[] Arguments() =>
        [$"-httpListenAddr=127.0.0.1:{Port}", $"-storageDataPath={Folder.Path}", "-retentionPeriod=10y", "-search.latencyOffset=0s", "-loggerLevel=ERROR"];
}
