using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using Lampwarden.Analysis.Tungsten;

namespace Lampwarden.Analysis.Prediction;

public sealed partial class CircuitSimulation
{
    // Line current at one instant, and the rates of every filament and of the unit.
    private double Rates(int sineIndex, double[] temperatures, double[] temperatureRates, double[] unitState, double[] unitRates)
    {
        ReadFilaments(temperatures);
        var bankOhms = JoinOhms() + sourceOhms;
        var source = peakVolts * sine[sineIndex];
        double amps;
        if (double.IsPositiveInfinity(FaultOhms))
        {
            amps = unit.Current(source, bankOhms, unitState, unitRates);
        }
        else
        {
            // The unit sees the Thevenin equivalent of the bank with the fault across its terminals.
            var divider = FaultOhms / (bankOhms + FaultOhms);
            var unitAmps = unit.Current(source * divider, bankOhms * divider, unitState, unitRates);
            amps = (source + FaultOhms * unitAmps) / (bankOhms + FaultOhms);
        }

        HeatLamps(amps, temperatureRates);
        return amps;
    }

    // Resistance, loss and reciprocal heat capacity of every lamp: one look into the grid for all three. Bounds are checked by the clamp,
    // not again by the runtime: that and the single look make a step of twenty lamps some three times as fast.
    private void ReadFilaments(double[] temperatures)
    {
        ref var cells = ref MemoryMarshal.GetArrayDataReference(grid.Cells);
        var lastRow = grid.Cells.Length / FilamentGrid.Columns - 2;
        for (var lamp = 0; lamp < lamps.Length; lamp++)
        {
            ref var state = ref lamps[lamp];
            if (!state.HasFilament)
            {
                continue;
            }

            var temperature = temperatures[lamp];
            var position = (temperature - FilamentGrid.FirstKelvin) * (1 / FilamentGrid.StepKelvin);

            // Beyond the grid, which no filament survives, the last straight line is carried on.
            var row = (int)position;
            row = row < 0 ? 0 : row > lastRow ? lastRow : row;
            var share = position - row;
            ref var low = ref Unsafe.Add(ref cells, row * FilamentGrid.Columns);
            ref var high = ref Unsafe.Add(ref low, FilamentGrid.Columns);
            state.Siemens = 1 / (state.Filament.Ratio * (low + share * (high - low)));
            var radiation = Unsafe.Add(ref low, 1) + share * (Unsafe.Add(ref high, 1) - Unsafe.Add(ref low, 1));
            var gas = Unsafe.Add(ref low, 2) + share * (Unsafe.Add(ref high, 2) - Unsafe.Add(ref low, 2));
            var perHeat = Unsafe.Add(ref low, 3) + share * (Unsafe.Add(ref high, 3) - Unsafe.Add(ref low, 3));
            state.Loss = state.Filament.Radiation * radiation + state.Filament.Gas * gas + state.Filament.Lead * temperature + state.Filament.Offset;
            state.PerHeat = perHeat * state.Filament.PerKilogram;
        }
    }

    // Series parts add ohms, parallel parts add siemens; both are kept for sharing the current out.
    private double JoinOhms()
    {
        Array.Clear(sums);
        for (var node = 0; node < nodes.Length; node++)
        {
            ref readonly var place = ref nodes[node];
            var siemens = place.Leaf >= 0 ? lamps[place.Leaf].Path : place.IsParallel ? sums[node] : 1 / sums[node];
            nodeSiemens[node] = siemens;
            if (place.Parent >= 0)
            {
                sums[place.Parent] += place.IsInParallel ? siemens : 1 / siemens;
            }
        }

        return 1 / nodeSiemens[^1];
    }

    private void HeatLamps(double lineAmps, double[] temperatureRates)
    {
        nodeVolts[^1] = lineAmps / nodeSiemens[^1];
        for (var node = nodes.Length - 1; node >= 0; node--)
        {
            ref readonly var place = ref nodes[node];
            if (place.Parent >= 0)
            {
                nodeVolts[node] = place.IsInParallel
                    ? nodeVolts[place.Parent]
                    : nodeVolts[place.Parent] * nodeSiemens[place.Parent] / nodeSiemens[node];
            }

            if (place.Leaf >= 0)
            {
                ref readonly var lamp = ref lamps[place.Leaf];
                temperatureRates[place.Leaf] = lamp.HasFilament
                    ? ((lamp.IsOut ? 0 : nodeVolts[node] * nodeVolts[node] * lamp.Siemens) - lamp.Loss) * lamp.PerHeat
                    : 0;
            }
        }
    }

    /// <summary>Place of a part in the bank, laid out for the two runs over it.</summary>
    private readonly record struct Node(int Leaf, int Parent, bool IsParallel, bool IsInParallel);

    /// <summary>One lamp at one instant.</summary>
    private struct LampInstant
    {
        public FilamentCoefficients Filament;
        public double Siemens;
        public double Loss;
        public double PerHeat;
        public bool HasFilament;
        public bool IsOut;

        /// <summary>What the circuit finds in this lamp's place.</summary>
        public readonly double Path => IsOut ? OpenSiemens : Siemens;
    }
}
