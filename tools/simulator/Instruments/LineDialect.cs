using System.Globalization;

namespace Lampwarden.Simulator.Instruments;

/// <summary>
/// Three ways in which a free-running meter may write its display, all of our own invention; config/meters describes them to the product.
/// <list type="bullet">
/// <item>words: <c>AC 0.4125 A</c>, overload <c>AC O.L A</c></item>
/// <item>fields: <c>I;+412.5;mA;AUTO</c>, overload <c>I;+OL;mA;AUTO</c></item>
/// <item>columns: <c>A~+04125-4 .</c>: function, coupling, sign, five digits, power of ten, flag; overload <c>A~+-----+0 .</c></item>
/// </list>
/// </summary>
public static class LineDialect
{
    /// <summary>Names of the dialects.</summary>
    public static IReadOnlyList<string> Names { get; } = ["words", "fields", "columns"];

    /// <summary>A .NET regular expression for the dialect's lines, with the groups the product's configuration knows.</summary>
    /// <exception cref="ArgumentException">There is no such dialect.</exception>
    public static string Pattern(string dialect) => dialect switch
    {
        "words" => "^(?<coupling>AC|DC) +(?<value>[-+]?[0-9]+[.][0-9]+|O[.]L) +(?<unit>[mu]?[AV])$",
        "fields" => "^[IU];(?<sign>[-+])(?<value>[0-9]+([.][0-9]+)?|OL);(?<unit>[mu]?[AV]);(?<flags>[A-Z ]*)$",
        "columns" => "^(?<unit>[AV])(?<coupling>[~=])(?<sign>[-+])(?<value>[0-9]{5}|-----)(?<exponent>[-+][0-9]) (?<flags>.)$",
        _ => throw new ArgumentException($"There is no line dialect '{dialect}'; there are {string.Join(", ", Names)}."),
    };

    /// <summary>One line without its end.</summary>
    /// <param name="dialect">One of <see cref="Names"/>.</param>
    /// <param name="quantity">What is shown.</param>
    /// <param name="value">In A or V; infinity is overload.</param>
    /// <param name="countSize">Smallest step of the display.</param>
    /// <exception cref="ArgumentException">There is no such dialect.</exception>
    public static string Write(string dialect, MeasuredQuantity quantity, double value, double countSize)
    {
        var current = quantity == MeasuredQuantity.LineCurrent;
        var decimals = Math.Clamp((int)Math.Round(-Math.Log10(countSize)), 0, 9);
        var overload = double.IsPositiveInfinity(value);
        return dialect switch
        {
            "words" => $"AC {(overload ? "O.L" : Fixed(value, decimals))} {(current ? "A" : "V")}",
            "fields" => current
                ? $"I;+{(overload ? "OL" : Fixed(value * 1000, Math.Max(0, decimals - 3)))};mA;AUTO"
                : $"U;+{(overload ? "OL" : Fixed(value, decimals))};V;AUTO",
            "columns" => $"{(current ? 'A' : 'V')}~+{(overload ? "-----+0" : Columns(value, decimals))} .",
            _ => throw new ArgumentException($"There is no line dialect '{dialect}'; there are {string.Join(", ", Names)}."),
        };
    }

    private static string Fixed(double value, int decimals) => value.ToString("F" + decimals.ToString(CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);

    private static string Columns(double value, int decimals)
    {
        while (decimals > 0 && Math.Round(value * Math.Pow(10, decimals)) > 99999)
        {
            decimals--;
        }

        return string.Create(CultureInfo.InvariantCulture, $"{Math.Round(value * Math.Pow(10, decimals)):00000}-{decimals}");
    }
}
