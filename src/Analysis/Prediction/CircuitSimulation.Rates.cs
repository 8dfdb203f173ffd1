using Lampwarden.Analysis.Tungsten;

namespace Lampwarden.Analysis.Prediction;

public sealed partial class CircuitSimulation
{
    // Line current at one instant, and the rates of every filament and of the unit.
    private double Rates(int sineIndex, double[] temperatures, double[] temperatureRates, double[] unitState, double[] unitRates)
    {
        var bankOhms = JoinOhms(temperatures) + sourceOhms;
        var source = Math.Sqrt(2) * MainsVolts * sine[sineIndex];
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

        HeatLamps(amps, temperatures, temperatureRates);
        return amps;
    }

    private double JoinOhms(double[] temperatures)
    {
        var parents = network.Parent;
        Array.Clear(sums);
        for (var node = 0; node < parents.Length; node++)
        {
            var leaf = network.Leaf[node];
            double ohms;
            if (leaf < 0)
            {
                ohms = network.IsParallel[node] ? 1 / sums[node] : sums[node];
            }
            else if (isOut[leaf])
            {
                ohms = OpenOhms;
            }
            else
            {
                ohms = network.Lamps[leaf].Filament is null ? network.Lamps[leaf].ResistorOhms : filaments[leaf].Ratio * ReadRatio(temperatures[leaf]);
            }

            nodeOhms[node] = ohms;
            var parent = parents[node];
            if (parent >= 0)
            {
                sums[parent] += network.IsParallel[parent] ? 1 / ohms : ohms;
            }
        }

        return nodeOhms[^1];
    }

    private void HeatLamps(double lineAmps, double[] temperatures, double[] temperatureRates)
    {
        var last = through.Length - 1;
        for (var node = last; node >= 0; node--)
        {
            var parent = network.Parent[node];
            var amps = parent < 0 ? lineAmps : network.IsParallel[parent] ? through[parent] * nodeOhms[parent] / nodeOhms[node] : through[parent];
            through[node] = amps;
            var leaf = network.Leaf[node];
            if (leaf >= 0)
            {
                temperatureRates[leaf] = network.Lamps[leaf].Filament is null
                    ? 0
                    : KelvinPerSecond(filaments[leaf], temperatures[leaf], isOut[leaf] ? 0 : amps * amps * nodeOhms[node]);
            }
        }
    }

    private double ReadRatio(double temperature)
    {
        var position = (temperature - FilamentGrid.FirstKelvin) * (1 / FilamentGrid.StepKelvin);
        var row = Row(position);
        var cells = grid.Cells;
        var at = row * FilamentGrid.Columns;
        return cells[at] + (position - row) * (cells[at + FilamentGrid.Columns] - cells[at]);
    }

    private double KelvinPerSecond(in FilamentCoefficients filament, double temperature, double watts)
    {
        var position = (temperature - FilamentGrid.FirstKelvin) * (1 / FilamentGrid.StepKelvin);
        var row = Row(position);
        var share = position - row;
        var cells = grid.Cells.AsSpan(row * FilamentGrid.Columns, 2 * FilamentGrid.Columns);
        var radiation = cells[1] + share * (cells[5] - cells[1]);
        var gas = cells[2] + share * (cells[6] - cells[2]);
        var perHeat = cells[3] + share * (cells[7] - cells[3]);
        var loss = filament.Radiation * radiation + filament.Gas * gas + filament.Lead * temperature + filament.Offset;
        return (watts - loss) * filament.PerKilogram * perHeat;
    }

    // Beyond the grid, which no filament survives, the last straight line is carried on.
    private int Row(double position) => Math.Clamp((int)position, 0, grid.Cells.Length / FilamentGrid.Columns - 2);
}
