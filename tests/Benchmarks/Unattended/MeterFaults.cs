using Lampwarden.Simulator.Instruments;

namespace Lampwarden.Benchmarks.Unattended;

/// <summary>Faults of the meter and its cable, seen through the whole service and the far end of a webhook.</summary>
internal static class MeterFaults
{
    public static IEnumerable<Fault> All =>
    [
        Gap("the cable is pulled and put back", MeterTrouble.Unplugged, expectAlert: true),
        Gap("the meter falls silent", MeterTrouble.Silent, expectAlert: true),
        Gap("the two sides run at different baud rates", MeterTrouble.Garbled, expectAlert: true),
        Gap("a megabyte without a line end", MeterTrouble.Endless, expectAlert: false),
        Gap("lines nobody asked for, without pause", MeterTrouble.Babbling, expectAlert: false),
        Gap("it answers the question before last", MeterTrouble.Late, expectAlert: false),
        Gap("it is switched off and on", MeterTrouble.Restarted, expectAlert: false),
        new("meter", "after a minute it shows the same value whatever is measured, while the unit shorts", "a person is told that its value does not move", StuckAsync),
    ];

    private static Fault Gap(string injected, MeterTrouble kind, bool expectAlert) => new(
        "meter",
        injected + (expectAlert ? " after 6 s" : ""),
        expectAlert ? "a gap with its reason, a critical alert, and readings again afterwards" : "each poll without a reading is a gap with its reason; the service goes on",
        async () =>
        {
            using var inbox = new Inbox();
            await using var shift = Shift.Prepare(Shift.Trouble(kind, 4, 6));
            await shift.StartAsync($$"""{ "routes": [ {{inbox.Route("far")}} ] }""");
            var told = expectAlert ? await inbox.UntilAsync(letter => letter.Cause == "meter-silent" && letter.What == "raised", "an alert meter-silent") : null;
            await Task.Delay(TimeSpan.FromSeconds(9));
            await shift.StopAsync();
            var run = shift.Run;
            BrokenPromiseException.Unless(!expectAlert || run.Gaps.Count > 0, "no gap on record");
            var readings = shift.Review(store => store.Readings(run.Info.Run).ToList());
            BrokenPromiseException.Unless(!readings[^1].IsMissing || readings.TakeLast(15).Any(reading => !reading.IsMissing), "it never read again");
            var reasons = string.Join(", ", run.Gaps.Select(gap => gap.Reason).Distinct());
            return $"{(reasons.Length == 0 ? "no reading lost" : "gaps: " + reasons)}; {(told is null ? "" : "told: " + told.Cause + "; ")}reads again";
        });

    private static async Task<string> StuckAsync()
    {
        using var inbox = new Inbox();
        await using var shift = Shift.Prepare(scenario =>
        {
            Shift.Trouble(MeterTrouble.Stuck, 60, 600)(scenario);
            Shift.Short(65)(scenario);
        });
        await shift.StartAsync($$"""{ "routes": [ {{inbox.Route("far")}} ] }""");
        var letter = await inbox.UntilAsync(letter => letter.Cause == "meter-stuck", "an alert meter-stuck", 150);
        await shift.StopAsync();
        return $"told: {letter.Cause}, {letter.Severity}";
    }
}
