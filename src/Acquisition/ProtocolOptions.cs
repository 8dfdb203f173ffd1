using System.ComponentModel.DataAnnotations;
using Lampwarden.Acquisition.Protocol;

namespace Lampwarden.Acquisition;

/// <summary>The language of a meter: scpi (question and answer) or lines (the meter talks by itself). docs/meters.md shows how to describe one.</summary>
public sealed class ProtocolOptions
{
    /// <summary>scpi or lines.</summary>
    [AllowedValues("scpi", "lines")]
    public string Kind { get; set; } = "scpi";

    /// <summary>Scpi: the question whose answer is a number. A semicolon chain such as INITiate;:FETCh? is allowed.</summary>
    public string Query { get; set; } = "READ?";

    /// <summary>Commands sent after each opening, in order, such as CONFigure:CURRent:AC 3; for lines, whatever makes the meter talk.</summary>
    public IList<string> SetUp { get; set; } = [];

    /// <summary>Scpi: whether the meter knows *IDN? and the other common commands of IEEE 488.2. False for a meter that only answers its question.</summary>
    public bool Identify { get; set; } = true;

    /// <summary>Scpi: seconds between two looks at the event status (*ESR?), which tell of a restart and of errors; 0 to 3600, 0 for never.</summary>
    [Range(0.0, 3600.0)]
    public double StatusSeconds { get; set; } = 30;

    /// <summary>Scpi: which of the comma-separated values of an answer, counted from 1; 0 says that an answer is one value. 0 to 64.</summary>
    [Range(0, 64)]
    public int Field { get; set; }

    /// <summary>What ends our commands: lf, cr or crlf.</summary>
    [AllowedValues("lf", "cr", "crlf")]
    public string CommandEnd { get; set; } = "lf";

    /// <summary>
    /// A .NET regular expression that must match a whole line, blanks at its ends cut off. Named groups: value, and as far as the line has them
    /// sign, unit, exponent, coupling, overload, flags. Required for lines; with scpi it reads the answers instead of the standard's number form.
    /// </summary>
    [LinePatternRule]
    public string Pattern { get; set; } = "";

    /// <summary>Lines that match this .NET regular expression are passed over without a word: headings, other functions. Empty: none.</summary>
    [RegularExpressionRule]
    public string Ignore { get; set; } = "";

    /// <summary>Characters each of which ends a line; empty for line feed and carriage return. At most 4.</summary>
    [StringLength(4)]
    public string LineEnd { get; set; } = "";

    /// <summary>Unit of the value where the line names none, such as mA; empty for A or V.</summary>
    public string Unit { get; set; } = "";

    /// <summary>The meter's own words for units, as word=unit, such as MAMP=mA. Plain units with SI prefixes are known.</summary>
    public IList<string> UnitWords { get; set; } = [];

    /// <summary>Codes of the exponent group, as code=power of ten, such as 2=-3; empty when the group is the power itself.</summary>
    public IList<string> ExponentWords { get; set; } = [];

    /// <summary>What stands in the value group when the input is beyond the range. A match of the group overload says so too.</summary>
    public IList<string> OverloadWords { get; set; } = ["OL", "O.L", ".OL", "0L", "0.L", "-OL", "OVER", "OVLD", "OFL", "----", "-----"];

    /// <summary>Words in the flags group that make a line no reading, such as HOLD: the display stands still.</summary>
    public IList<string> RefuseWords { get; set; } = ["HOLD"];

    /// <summary>The meter writes 0,412 for 0.412.</summary>
    public bool DecimalComma { get; set; }

    internal string CommandEndText => CommandEnd switch
    {
        "cr" => "\r",
        "crlf" => "\r\n",
        _ => "\n",
    };
}
