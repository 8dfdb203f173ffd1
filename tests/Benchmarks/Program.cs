using Lampwarden.Benchmarks.Detection;
using Lampwarden.Benchmarks.Meters;
using Lampwarden.Benchmarks.Page;
using Lampwarden.Benchmarks.Physics;
using Lampwarden.Benchmarks.Recording;
using Lampwarden.Benchmarks.Unattended;
using Lampwarden.Benchmarks.Unattended.Haul;

// Each subject is one word: dotnet run -c Release --project tests/Benchmarks -- SUBJECT [options]
switch (args.FirstOrDefault())
{
    case "detection":
        return DetectionCommand.Run(args[1..]);
    case "detection-cost":
        return DetectionCostCommand.Run();
    case "store":
        return await StoreCommand.RunAsync();
    case "kill-store":
        return await KillStoreCommand.RunAsync(args[1..]);
    case "forward":
        return await ForwardCommand.RunAsync(args[1..]);
    case "meters":
        return await MetersCommand.RunAsync(args[1..]);
    case "fuzz-meters":
        return FuzzCommands.Meters(args[1..]);
    case "fuzz-session":
        return await FuzzCommands.SessionAsync(args[1..]);
    case "meters-peer":
        return await Peer.RunAsync(args[1..]);
    case "physics":
        return PhysicsCommand.Run();
    case "physics-checks":
        return PhysicsChecksCommand.Run();
    case "page":
        return await PageCommand.RunAsync(args[1..]);
    case "faults":
        return await FaultsCommand.RunAsync(args[1..]);
    case "shop":
        return await ShopCommand.RunAsync(args[1..]);
    case "shop-peer":
        return await ShopCommand.PeerAsync(args[1..]);
    case "long-haul":
        return await LongHaulCommand.RunAsync(args[1..]);
    default:
        Console.Error.WriteLine("Name a subject: detection [--corpus ID] [--runs N] [--nominal N] [--shifted] [--rate R] [--no-mains] [--no-oracles] [--no-baselines] [--only TEXT] [--threads N] [--verbose]");
        Console.Error.WriteLine("  or: store; kill-store [--times 200]; forward --url URL [--api v1|v2] [--bucket NAME] [--hours H] [--rate R]");
        Console.Error.WriteLine("  or: meters [flood|idle|crowd]; fuzz-meters [--lines N] [--seed S]; fuzz-session [--minutes M] [--seed S]");
        Console.Error.WriteLine("  or: physics; physics-checks");
        Console.Error.WriteLine("  or: page [look-back|memory|forty] (needs Chromium)");
        Console.Error.WriteLine("  or: faults [--only TEXT]; shop [--seconds S [--benches 5,10,20]]; long-haul [--shifts N]");
        return 2;
}
