using Lampwarden.Analysis.Tungsten;

namespace Lampwarden.Analysis.Lamps;

public sealed partial class Lamp
{
    /// <summary>
    /// Filament temperature a time after switching off: a re-strike within seconds finds it warm, and the peak smaller. The gas and the bulb,
    /// which stay warm for minutes and hold the filament some kelvin above the room, are left out.
    /// </summary>
    /// <param name="fromKelvin">Temperature when the current stopped.</param>
    /// <param name="seconds">Since then, 0 or more.</param>
    /// <returns>Kelvin; NaN for a plain resistor.</returns>
    public double CooledKelvin(double fromKelvin, double seconds)
    {
        if (Filament is null)
        {
            return double.NaN;
        }

        // Cooling slows as it goes: steps grow with the temperature's own time constant.
        var grid = FilamentGrid.At(Filament.AmbientKelvin);
        var coefficients = new FilamentCoefficients(Filament, grid);
        var (kelvin, left) = (fromKelvin, seconds);
        while (left > 0 && kelvin - Filament.AmbientKelvin > 1e-3)
        {
            var rate = coefficients.KelvinPerSecond(grid, kelvin, 0);
            var step = Math.Min(left, 0.02 * (kelvin - Filament.AmbientKelvin) / Math.Max(-rate, 1e-9));
            var middle = kelvin + 0.5 * step * rate;
            kelvin += step * coefficients.KelvinPerSecond(grid, middle, 0);
            left -= step;
        }

        return kelvin;
    }
}
