using Lampwarden.Acquisition.Tests.Support;
using Lampwarden.Fuzzing;
using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Acquisition.Tests;

/// <summary>Short forms; the long ones are commands of tests/Benchmarks (fuzz-meters, fuzz-session).</summary>
public sealed class FuzzTests
{
    [Fact]
    public void Parsers_RandomAndSpoiltLines_TakeNoWrongNumber() =>
        Assert.All(ParserFuzz.Run(20_000, seed: 7), outcome =>
        {
            Assert.Null(outcome.Wrong);
            Assert.True(outcome.Numbers > 1000, "the lines must not all be hopeless, or nothing is tried");
        });

    [Theory]
    [InlineData("scpi", true)]
    [InlineData("words", true)]
    [InlineData("scpi", false)]
    public async Task Session_SomeSecondsOfNoise_GoesOnAndTakesNoWrongNumber(string dialect, bool serial)
    {
        await using IInstrumentPort port = serial ? TestBench.NewTerminal() : new TcpInstrumentPort();

        var outcome = await new SessionFuzz(port, dialect, seed: 11).RunAsync(TimeSpan.FromSeconds(4), TestContext.Current.CancellationToken);

        Assert.Null(outcome.Wrong);
        Assert.True(outcome.Events > 0);
    }
}
