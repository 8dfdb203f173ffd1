using Lampwarden.Host.Web.Live;

namespace Lampwarden.Host.Tests.Web;

public sealed class LiveTraceTests
{
    [Fact]
    public void Append_ThreeDaysAtFiftyASecond_StaysBoundedAndKeepsASpike()
    {
        var trace = new LiveTrace();
        for (var index = 0; index < 3_000_000; index++)
        {
            trace.Append(index / 50.0, index == 1_234_567 ? 4 : 0.4);
        }

        var document = trace.Document("r");
        Assert.InRange(document.Seconds.Length, 700, 1500);
        Assert.Equal(4, document.HighAmps.Max());
        Assert.Equal(0.4, document.LowAmps.Min());
        Assert.Equal(240, document.First.Seconds.Length);
        Assert.Equal(2_999_999 / 50.0, document.LastSeconds);
    }

    [Fact]
    public void Append_LongGap_StaysAGap()
    {
        var trace = new LiveTrace();
        for (var index = 0; index < 20_000; index++)
        {
            trace.Append(index / 2.0, index is > 5000 and < 9000 ? double.NaN : 0.4);
        }

        var document = trace.Document("r");
        var gap = Array.FindIndex(document.LowAmps, double.IsNaN);
        Assert.InRange(document.Seconds[gap], 2400, 2600);
        Assert.True(document.Seconds[gap + 1] - document.Seconds[gap] > 1500);
    }

    [Fact]
    public void Append_ATimeThatDoesNotAdvance_IsPassedOver()
    {
        var trace = new LiveTrace();
        trace.Append(1, 0.4);
        trace.Append(1, 9);
        trace.Append(0.5, 9);

        Assert.Equal([0.4], trace.Document("r").HighAmps);
    }
}
