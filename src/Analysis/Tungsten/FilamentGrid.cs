namespace Lampwarden.Analysis.Tungsten;

/// <summary>
/// The tungsten curves on an even, fine grid for time stepping: one row holds all that a filament needs at one temperature, so a step
/// reads two neighbouring rows. Straight lines between rows 2 K apart are within 0.02 % of the curves at 300 K and 0.001 % above 1000 K.
/// </summary>
internal sealed class FilamentGrid
{
    public const double FirstKelvin = 200;
    public const double LastKelvin = 3800;
    public const double StepKelvin = 2;
    public const int Columns = 4;

    /// <summary>Resistance ratio, net radiation eps (T^4 - Ta^4), gas conduction T^1.7 and reciprocal specific heat.</summary>
    public readonly double[] Cells;

    /// <summary>Temperature of the surroundings in kelvin, at which the net radiation is zero.</summary>
    public readonly double AmbientKelvin;

    private static readonly FilamentGrid Room = new(Lamps.Lamp.RoomKelvin);

    private FilamentGrid(double ambientKelvin)
    {
        AmbientKelvin = ambientKelvin;
        var rows = (int)((LastKelvin - FirstKelvin) / StepKelvin) + 1;
        Cells = new double[rows * Columns];
        for (var row = 0; row < rows; row++)
        {
            var kelvin = FirstKelvin + row * StepKelvin;
            Cells[row * Columns] = TungstenProperties.ResistanceRatio(kelvin);
            Cells[row * Columns + 1] = TungstenProperties.Emissivity(kelvin) * (Math.Pow(kelvin, 4) - Math.Pow(ambientKelvin, 4));
            Cells[row * Columns + 2] = Math.Pow(kelvin, Lamps.Lamp.GasExponent);
            Cells[row * Columns + 3] = 1 / TungstenProperties.SpecificHeat(kelvin);
        }
    }

    public static FilamentGrid At(double ambientKelvin) => ambientKelvin == Room.AmbientKelvin ? Room : new FilamentGrid(ambientKelvin);

    /// <summary>One column at one temperature; temperatures outside the grid are read at its edge.</summary>
    public double Read(int column, double kelvin)
    {
        var position = Math.Clamp((kelvin - FirstKelvin) / StepKelvin, 0, Cells.Length / Columns - 1.000001);
        var row = (int)position;
        var share = position - row;
        var low = Cells[row * Columns + column];
        return low + share * (Cells[(row + 1) * Columns + column] - low);
    }
}
