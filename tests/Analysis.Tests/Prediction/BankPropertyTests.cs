using CsCheck;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Prediction;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Tests.Prediction;

/// <summary>What must hold for any bank: tried on random ones.</summary>
public sealed class BankPropertyTests
{
    private const int Tries = 300;

    private static readonly double[] Watts = [15, 25, 40, 60, 75, 100, 150, 200, 300];

    private static readonly Gen<Lamp> AnyLamp =
        Gen.Select(Gen.Int[0, Watts.Length - 1], Gen.Int[0, 4].Select(kind => new[] { 110.0, 120, 130, 230, 240 }[kind]), Gen.Bool)
            .Select((kind, volts, gas) => Lamp.FromNameplate($"{Watts[kind]} W", Watts[kind], volts, gas ? LampFill.Gas : LampFill.Vacuum));

    private static readonly Gen<BankPart> AnyPart = Gen.Recursive<BankPart>((depth, inner) => depth >= 3
        ? AnyLamp.Select(lamp => (BankPart)new LampPart(lamp))
        : Gen.OneOf(
            AnyLamp.Select(lamp => (BankPart)new LampPart(lamp)),
            inner.List[2, 3].Select(parts => (BankPart)new SeriesPart(parts)),
            inner.List[2, 3].Select(parts => (BankPart)new ParallelPart(parts))));

    private static readonly Gen<Bank> AnyBank = AnyPart.Select(part => new Bank("random", part));
    private static readonly Gen<double> AnyVolts = Gen.Double[20, 250];
    private static readonly Gen<double> AnyOhms = Gen.Double[0, 7].Select(log => Math.Exp(log));

    [Fact]
    public void Feed_AnyBank_KirchhoffHolds() => Gen.Select(AnyBank, AnyVolts, AnyOhms).Sample(
        (bank, volts, ohms) =>
        {
            var solver = new BankSolver(bank);
            var amps = solver.Feed(volts, ohms);
            Assert.Equal(volts, solver.BankVolts + amps * ohms, 1e-6 * volts);
            var index = 0;
            var (partVolts, partAmps) = Check(bank.Root, solver, ref index);
            Assert.Equal(solver.BankVolts, partVolts, 1e-6 * volts);
            Assert.Equal(amps, partAmps, 1e-6 * amps);
        },
        iter: Tries);

    [Fact]
    public void Feed_MoreMains_MoreCurrent() => Gen.Select(AnyBank, AnyVolts, AnyOhms).Sample(
        (bank, volts, ohms) =>
        {
            var solver = new BankSolver(bank);
            Assert.True(solver.Feed(1.02 * volts, ohms) > solver.Feed(volts, ohms));
        },
        iter: Tries);

    [Fact]
    public void Feed_OneMoreLamp_BesideAddsAndInSeriesLowers() => Gen.Select(AnyPart, AnyLamp, AnyVolts, AnyOhms).Sample(
        (part, lamp, volts, ohms) =>
        {
            var alone = new BankSolver(new Bank("alone", part)).Feed(volts, ohms);
            Assert.True(new BankSolver(new Bank("beside", new ParallelPart([part, new LampPart(lamp)]))).Feed(volts, ohms) > alone);
            Assert.True(new BankSolver(new Bank("series", new SeriesPart([part, new LampPart(lamp)]))).Feed(volts, ohms) < alone);
        },
        iter: Tries);

    [Fact]
    public void Feed_PartsInAnotherOrder_ChangesNothing() => Gen.Select(AnyBank, AnyVolts, AnyOhms).Sample(
        (bank, volts, ohms) =>
        {
            var amps = new BankSolver(bank).Feed(volts, ohms);
            Assert.Equal(amps, new BankSolver(new Bank("turned", Turned(bank.Root))).Feed(volts, ohms), 1e-9 * amps);
        },
        iter: Tries);

    [Fact]
    public void Feed_EqualLamps_ShareEqually() => Gen.Select(AnyLamp, Gen.Int[2, 6], AnyVolts).Sample(
        (lamp, count, volts) =>
        {
            var solver = new BankSolver(new Bank("equal", new SeriesPart([.. Enumerable.Repeat(new LampPart(lamp), count)])));
            solver.Feed(volts, 0);
            Assert.Equal(volts / count, solver.LampVolts[0], 1e-6 * volts);
        },
        iter: Tries);

    [Fact]
    public void Carry_IsTheInverseOfFeed() => Gen.Select(AnyBank, AnyVolts).Sample(
        (bank, volts) =>
        {
            var solver = new BankSolver(bank);
            Assert.Equal(volts, solver.Carry(solver.Feed(volts, 0)), 1e-6 * volts);
        },
        iter: Tries);

    // Of one make and rating, cold, lit together; the known exceptions (a warm lamp, other makers, other rated volts) are left out.
    [Fact]
    public void SwitchOn_ColdSeriesString_SmallestGlowsFirst() => Gen.Select(
        Gen.Shuffle(new[] { 40.0, 60, 75, 100, 150, 200 }, 2, 3), Gen.Int[0, 179], Gen.Bool.Select(big => big ? new Mains(230, 50) : new Mains(120, 60))).Sample(
        (watts, phase, mains) =>
        {
            var bank = new Bank("string", new SeriesPart([.. watts.Select(value => new LampPart(Lamp.FromNameplate("lamp", value, mains.Volts)))]));
            var simulation = new CircuitSimulation(mains, bank, ResistorUnit.Short, phase);
            while (simulation.Seconds < 1)
            {
                simulation.Step();
                for (var lamp = 0; lamp < watts.Length; lamp++)
                {
                    if (simulation.FilamentKelvin[lamp] > 798)
                    {
                        Assert.Equal(watts.Min(), watts[lamp]);
                        return;
                    }
                }
            }

            Assert.Fail("nothing glowed within a second");
        },
        iter: 60);

    // Volts and amperes of a part from its lamps, each law checked on the way.
    private static (double Volts, double Amps) Check(BankPart part, BankSolver solver, ref int index)
    {
        if (part is LampPart leaf)
        {
            var (volts, amps) = (solver.LampVolts[index], solver.LampAmps[index]);
            Assert.Equal(leaf.Lamp.Curve.Amps(volts, out _), amps, 1e-6 * amps);
            index++;
            return (volts, amps);
        }

        var inner = part is SeriesPart series ? series.Parts : ((ParallelPart)part).Parts;
        var found = new List<(double Volts, double Amps)>();
        foreach (var each in inner)
        {
            found.Add(Check(each, solver, ref index));
        }

        if (part is SeriesPart)
        {
            Assert.All(found, each => Assert.Equal(found[0].Amps, each.Amps, 1e-6 * found[0].Amps));
            return (found.Sum(each => each.Volts), found[0].Amps);
        }

        Assert.All(found, each => Assert.Equal(found[0].Volts, each.Volts, 1e-6 * found[0].Volts));
        return (found[0].Volts, found.Sum(each => each.Amps));
    }

    private static BankPart Turned(BankPart part) => part switch
    {
        SeriesPart series => new SeriesPart([.. series.Parts.Reverse().Select(Turned)]),
        ParallelPart parallel => new ParallelPart([.. parallel.Parts.Reverse().Select(Turned)]),
        _ => part,
    };
}
