using Lampwarden.Benchmarks.Detection;

// Each subject is one word: dotnet run -c Release --project tests/Benchmarks -- SUBJECT [options]
switch (args.FirstOrDefault())
{
    case "detection":
        return DetectionCommand.Run(args[1..]);
    default:
        Console.Error.WriteLine("Name a subject: detection [--corpus ID] [--runs N] [--nominal N] [--shifted] [--rate R] [--no-mains] [--no-oracles] [--no-baselines] [--only TEXT] [--threads N] [--verbose]");
        return 2;
}
