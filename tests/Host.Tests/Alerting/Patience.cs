using Microsoft.Extensions.Time.Testing;

namespace Lampwarden.Host.Tests.Alerting;

/// <summary>Waits for what another loop does, moving a fake clock on the way; fails when it never comes.</summary>
internal static class Patience
{
    /// <summary>Waits until it is so; with a clock, each look moves it by a step first.</summary>
    public static async Task UntilAsync(Func<bool> done, FakeTimeProvider? time = null, double stepSeconds = 1, int looks = 4000)
    {
        for (var look = 0; look < looks; look++)
        {
            if (done())
            {
                return;
            }

            time?.Advance(TimeSpan.FromSeconds(stepSeconds));
            await Task.Delay(time is null ? 10 : 2, TestContext.Current.CancellationToken);
        }

        Assert.Fail("It never came to pass.");
    }

    /// <summary>Lets the other loops run without moving the clock.</summary>
    public static Task SettleAsync() => Task.Delay(60, TestContext.Current.CancellationToken);
}
