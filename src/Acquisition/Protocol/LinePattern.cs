using System.Collections.Concurrent;
using System.Globalization;
using System.Text;
using System.Text.RegularExpressions;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>
/// Reads a free-running meter's lines as the configuration describes them. The pattern must match the whole line, blanks at its ends cut
/// off, and the value must be a number of the plain forms; a line that fits half is refused, never guessed at.
/// </summary>
internal sealed class LinePattern : IValueReader
{
    private const int LongestLine = 256;
    private const int MostRemembered = 256;
    // A pattern that backtracks without end must not hold the meter up: such a line is refused and told.
    private static readonly TimeSpan LongestMatch = TimeSpan.FromSeconds(1);
    private static readonly ConcurrentDictionary<string, Regex> Compiled = new(StringComparer.Ordinal);
    private readonly ProtocolOptions _options;
    private readonly Quantity _quantity;
    private readonly bool _acOnly;
    private readonly Regex _pattern;
    private readonly Regex? _ignore;
    private readonly UnitWord _unit;
    private readonly Dictionary<string, UnitWord?> _units = new(StringComparer.Ordinal);
    // A steady current writes the same few lines over and over, and what a line says depends on nothing else:
    // remembering them saves the expression's match, a third of what a line costs in a flood (tests/Benchmarks, meters flood).
    private readonly Dictionary<string, MeterValue> _remembered = new(StringComparer.Ordinal);
    private readonly Dictionary<string, MeterValue>.AlternateLookup<ReadOnlySpan<char>> _remembers;
    private readonly Dictionary<string, int> _exponents;
    private readonly int _value;
    private readonly int _sign;
    private readonly int _unitGroup;
    private readonly int _exponent;
    private readonly int _coupling;
    private readonly int _overload;
    private readonly int _flags;

    /// <exception cref="ArgumentException">The pattern or a unit cannot be read; <see cref="MeterRules"/> says so beforehand.</exception>
    public LinePattern(MeterOptions meter)
    {
        _options = meter.Protocol;
        _quantity = meter.Quantity;
        _remembers = _remembered.GetAlternateLookup<ReadOnlySpan<char>>();
        _acOnly = meter.Coupling == "ac";
        _pattern = Compile(_options.Pattern);
        _ignore = _options.Ignore.Length > 0 ? Compile(_options.Ignore) : null;
        _unit = _options.Unit.Length == 0 ? new UnitWord(_quantity, 0, null)
            : UnitWord.TryParse(_options.Unit, out var unit) ? unit.Value : throw new ArgumentException($"protocol.unit '{_options.Unit}' is no unit such as mA");
        _exponents = MeterRules.Pairs(_options.ExponentWords).ToDictionary(pair => pair.Word, pair => int.Parse(pair.Meaning, CultureInfo.InvariantCulture));
        foreach (var (word, meaning) in MeterRules.Pairs(_options.UnitWords))
        {
            _units[word] = UnitWord.TryParse(meaning, out var known) ? known : throw new ArgumentException($"protocol.unitWords: '{meaning}' is no unit such as mA");
        }

        (_value, _sign, _unitGroup, _exponent, _coupling, _overload, _flags) = (Number("value"), Number("sign"), Number("unit"),
            Number("exponent"), Number("coupling"), Number("overload"), Number("flags"));
    }

    /// <summary>A pattern ready to use; the same text gives the same object, since a thousand meters of a kind must not compile it a thousand times.</summary>
    public static Regex Compile(string pattern) =>
        Compiled.GetOrAdd(pattern, text => new Regex(text, RegexOptions.Compiled | RegexOptions.CultureInvariant, LongestMatch));

    /// <inheritdoc/>
    public MeterValue Read(ReadOnlySpan<byte> line) => Read(line, out _);

    /// <summary>What the line says.</summary>
    /// <param name="line">Its bytes.</param>
    /// <param name="notForUs">The line is to be passed over, or shows another quantity than this meter is wanted for.</param>
    public MeterValue Read(ReadOnlySpan<byte> line, out bool notForUs)
    {
        notForUs = false;
        line = ScpiNumber.TrimBlanks(line);
        if (line.Length > LongestLine)
        {
            return Refuse(line, "is longer than any reading");
        }

        Span<char> characters = stackalloc char[LongestLine];
        characters = characters[..Encoding.Latin1.GetChars(line, characters)];
        if (_remembers.TryGetValue(characters, out var known))
        {
            return known;
        }

        var text = characters.ToString();
        var value = Read(line, text, out notForUs);
        if (value.Kind == MeterEventKind.Reading)
        {
            if (_remembered.Count == MostRemembered)
            {
                _remembered.Clear();
            }

            _remembered.Add(text, value);
        }

        return value;
    }

    private MeterValue Read(ReadOnlySpan<byte> line, string text, out bool notForUs)
    {
        notForUs = false;
        try
        {
            if (_ignore is not null && _ignore.IsMatch(text))
            {
                notForUs = true;
                return Refuse(line, "is passed over");
            }

            var match = _pattern.Match(text);
            return match.Success && match.Length == text.Length ? Read(line, match.Groups, out notForUs) : Refuse(line, "does not fit protocol.pattern");
        }
        catch (RegexMatchTimeoutException)
        {
            return Refuse(line, "took the pattern over 1 s: it backtracks without end, write it more strictly");
        }
    }

    private MeterValue Read(ReadOnlySpan<byte> line, GroupCollection groups, out bool notForUs)
    {
        notForUs = false;
        var unit = _unit;
        if (Has(groups, _unitGroup))
        {
            if (UnitOf(groups[_unitGroup].Value) is not { } named)
            {
                return Refuse(line, $"has the unit '{groups[_unitGroup].Value}', which is none of ours; see protocol.unitWords");
            }

            unit = named;
        }

        if (unit.Quantity != _quantity)
        {
            notForUs = true;
            return Refuse(line, $"shows {(unit.Quantity == Quantity.LineCurrent ? "A where V is" : "V where A is")} wanted: is the dial right?");
        }

        var coupling = Has(groups, _coupling) ? UnitWord.CouplingOf(groups[_coupling].ValueSpan) : unit.Coupling;
        if (coupling == "dc" && _acOnly)
        {
            return Refuse(line, "is a DC reading; set the meter to AC");
        }

        if (Has(groups, _flags) && _options.RefuseWords.FirstOrDefault(word => groups[_flags].Value.Contains(word, StringComparison.OrdinalIgnoreCase)) is { } flag)
        {
            return Refuse(line, $"is marked {flag}");
        }

        var value = groups[_value].ValueSpan.Trim();
        if (Has(groups, _overload) || IsOverloadWord(value))
        {
            return MeterValue.Overload($"the meter sent {Excerpt.Of(line)}");
        }

        return TryExponent(groups, out var power)
            ? Scale(line, value, Has(groups, _sign) ? groups[_sign].ValueSpan.Trim() : "", unit.PowerOfTen + power)
            : Refuse(line, $"has the exponent code '{groups[_exponent].Value}', which protocol.exponentWords does not have");
    }

    private MeterValue Scale(ReadOnlySpan<byte> line, ReadOnlySpan<char> value, ReadOnlySpan<char> sign, int power)
    {
        // The power is written behind the number and both are read at once: 412.5 mA is 412.5E-3 to the last bit.
        Span<byte> number = stackalloc byte[64];
        if (value.Length > 40 || sign.Length > 1 || (sign.Length == 1 && sign[0] is not ('+' or '-' or ' ')))
        {
            return Refuse(line, "has no number in the group value");
        }

        var length = sign is "-" ? Put(number, 0, '-') : 0;
        foreach (var one in value)
        {
            if (one is 'e' or 'E' && power != 0)
            {
                return Refuse(line, "has an exponent and a scaled unit");
            }

            length = Put(number, length, _options.DecimalComma ? one switch { ',' => '.', '.' => ';', _ => one } : one);
        }

        if (power != 0)
        {
            length = Put(number, length, 'E');
            power.TryFormat(number[length..], out var digits, provider: CultureInfo.InvariantCulture);
            length += digits;
        }

        var read = ScpiNumber.Read(number[..length]);
        return read.Kind == MeterEventKind.Gap ? Refuse(line, "has no number in the group value") : read;

        static int Put(Span<byte> target, int at, char one)
        {
            target[at] = one < 128 ? (byte)one : (byte)'?';
            return at + 1;
        }
    }

    private bool TryExponent(GroupCollection groups, out int power)
    {
        power = 0;
        return !Has(groups, _exponent)
            || (_exponents.Count > 0
                ? _exponents.TryGetValue(groups[_exponent].Value.Trim(), out power)
                : int.TryParse(groups[_exponent].ValueSpan, NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture, out power) && Math.Abs(power) < 30);
    }

    private bool IsOverloadWord(ReadOnlySpan<char> value)
    {
        foreach (var word in _options.OverloadWords)
        {
            if (value.Equals(word, StringComparison.OrdinalIgnoreCase))
            {
                return true;
            }
        }

        return false;
    }

    private UnitWord? UnitOf(string word)
    {
        if (!_units.TryGetValue(word, out var unit) && _units.Count < 64) // a babbling meter must not fill the memory with words
        {
            _units[word] = UnitWord.TryParse(word, out unit) ? unit : null;
        }

        return unit;
    }

    private int Number(string group) => _pattern.GroupNumberFromName(group);

    private static bool Has(GroupCollection groups, int number) => number >= 0 && groups[number].Success && groups[number].Length > 0;

    private static MeterValue Refuse(ReadOnlySpan<byte> line, string why) => MeterValue.Refused(GapReason.NotANumber, $"{Excerpt.Of(line)} {why}");
}
