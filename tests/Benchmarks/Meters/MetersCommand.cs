namespace Lampwarden.Benchmarks.Meters;

/// <summary>
/// <c>meters [flood|idle|crowd]</c>: what a session costs beside a bare port, and how many meters one computer takes. The figures that are
/// compared come from one run; ratios are what counts, the rest depends on the machine.
/// </summary>
internal static class MetersCommand
{
    public static async Task<int> RunAsync(string[] args)
    {
        var wanted = args.FirstOrDefault();
        if (wanted is not (null or "flood" or "idle" or "crowd"))
        {
            Console.Error.WriteLine("meters [flood|idle|crowd]");
            return 2;
        }

        Console.WriteLine($"{Environment.ProcessorCount} processors, .NET {Environment.Version}, {System.Runtime.InteropServices.RuntimeInformation.OSDescription}");
        if (wanted is null or "flood")
        {
            await FloodBenchmark.RunAsync();
        }

        if (wanted is null or "idle")
        {
            await IdleBenchmark.RunAsync();
        }

        if (wanted is null or "crowd")
        {
            await CrowdBenchmark.RunAsync();
        }

        return 0;
    }
}
