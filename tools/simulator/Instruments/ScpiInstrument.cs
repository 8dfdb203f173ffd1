using System.Globalization;

namespace Lampwarden.Simulator.Instruments;

/// <summary>
/// The digital half of a simulated SCPI meter: takes a message, gives the answer. Knows the mandatory commands of IEEE 488.2 that make sense
/// here, CONFigure, MEASure, INITiate, FETCh, READ and the fixed ranges, and keeps an error queue.
/// </summary>
internal sealed class ScpiInstrument
{
    private const int PowerOn = 128;
    private const int CommandError = 32;
    private const int ExecutionError = 16;
    private const int OperationComplete = 1;
    private readonly SimulatedMeterOptions _options;
    private readonly Func<MeasuredQuantity, double?, Task<double>> _measure;
    private readonly ScpiErrorQueue _errors = new();
    private readonly double?[] _ranges = new double?[2];
    private MeasuredQuantity _function;
    private double? _last;
    private Task _running = Task.CompletedTask;
    private int _status = PowerOn;

    /// <param name="options">The meter.</param>
    /// <param name="measure">Measures a quantity in a range and takes the time it takes; infinity is overload.</param>
    public ScpiInstrument(SimulatedMeterOptions options, Func<MeasuredQuantity, double?, Task<double>> measure)
    {
        _options = options;
        _measure = measure;
        _function = options.Quantity;
    }

    /// <summary>Carries out a message of one or more commands; the answers of several queries are joined by semicolons; null when there is none.</summary>
    public async Task<string?> ExecuteAsync(string message)
    {
        List<string>? answers = null;
        var branch = "";
        foreach (var unit in message.Split(';', StringSplitOptions.TrimEntries | StringSplitOptions.RemoveEmptyEntries))
        {
            var space = unit.IndexOfAny([' ', '\t']);
            var header = space < 0 ? unit : unit[..space];
            var arguments = space < 0 ? [] : unit[(space + 1)..].Split(',', StringSplitOptions.TrimEntries);
            if (!header.StartsWith('*'))
            {
                // After a semicolon without a colon the header goes on in the branch of the one before.
                header = header.StartsWith(':') ? header[1..] : branch + header;
                branch = header.Contains(':', StringComparison.Ordinal) ? header[..(header.LastIndexOf(':') + 1)] : "";
            }

            var answer = header.EndsWith('?') ? await QueryAsync(header[..^1], arguments) : Command(header, arguments);
            if (answer is not null)
            {
                (answers ??= []).Add(answer);
            }
        }

        return answers is null ? null : string.Join(';', answers);
    }

    private async Task<string?> QueryAsync(string header, string[] arguments)
    {
        switch (header.ToUpperInvariant())
        {
            case "*IDN": return _options.Identity;
            case "*OPC" or "*TST": return header.Equals("*OPC", StringComparison.OrdinalIgnoreCase) ? "1" : "0";
            case "*ESE" or "*SRE" or "*STB": return "0";
            case "*ESR":
                (var status, _status) = (_status, 0);
                return status.ToString(CultureInfo.InvariantCulture);
        }

        if (ScpiHeader.Matches("SYSTem:ERRor[:NEXT]", header))
        {
            return _errors.Next();
        }

        if (ScpiHeader.Matches("SYSTem:VERSion", header))
        {
            return "1999.0";
        }

        if (ScpiHeader.Matches("MEASure[:SCALar]:RESistance", header) && !double.IsNaN(_options.ResistanceOhms))
        {
            return Number(_options.ResistanceOhms);
        }

        if (ScpiHeader.Matches("READ", header))
        {
            return await MeasureAsync();
        }

        if (ScpiHeader.Matches("FETCh", header))
        {
            await _running; // a result asked for while it is being measured is waited for
            return _last is { } last ? Number(last) : Error(-230, "Data corrupt or stale", ExecutionError);
        }

        if (FunctionOf("MEASure[:SCALar]", header) is { } function)
        {
            // MEASure sets up anew each time: a fixed range is lost, as on a real meter.
            return Configure(function, arguments) ? await MeasureAsync() : null;
        }

        if (RangeOf(header, "") is { } ranged)
        {
            return Number(_ranges[(int)ranged] ?? (ranged == MeasuredQuantity.LineCurrent ? _options.CurrentRange : _options.VoltageRange));
        }

        return RangeOf(header, ":AUTO") is { } automatic
            ? _ranges[(int)automatic] is null ? "1" : "0"
            : Error(-113, "Undefined header", CommandError);
    }

    private string? Command(string header, string[] arguments)
    {
        switch (header.ToUpperInvariant())
        {
            case "*CLS":
                _errors.Clear();
                _status = 0;
                return null;
            case "*RST":
                Reset();
                return null;
            case "*OPC":
                _status |= OperationComplete;
                return null;
            case "*WAI" or "*ESE" or "*SRE":
                return null;
        }

        if (FunctionOf("CONFigure[:SCALar]", header) is { } function)
        {
            Configure(function, arguments);
            return null;
        }

        if (RangeOf(header, "") is { } ranged)
        {
            SetRange(ranged, arguments);
            return null;
        }

        if (RangeOf(header, ":AUTO") is { } automatic)
        {
            _ranges[(int)automatic] = arguments is ["OFF" or "off" or "0"] ? _ranges[(int)automatic] ?? _options.CurrentRange : null;
            return null;
        }

        if (ScpiHeader.Matches("INITiate[:IMMediate]", header))
        {
            _running = StartAsync();
            return null;
        }

        return ScpiHeader.Matches("ABORt", header) || ScpiHeader.Matches("SYSTem:REMote", header) || ScpiHeader.Matches("SYSTem:LOCal", header)
            ? null
            : Error(-113, "Undefined header", CommandError);
    }

    private static MeasuredQuantity? FunctionOf(string root, string header) =>
        ScpiHeader.Matches(root + ":CURRent:AC", header) ? MeasuredQuantity.LineCurrent
        : ScpiHeader.Matches(root + ":VOLTage:AC", header) ? MeasuredQuantity.MainsVoltage
        : null;

    private static MeasuredQuantity? RangeOf(string header, string tail) =>
        ScpiHeader.Matches("[SENSe:]CURRent:AC:RANGe" + tail, header) ? MeasuredQuantity.LineCurrent
        : ScpiHeader.Matches("[SENSe:]VOLTage:AC:RANGe" + tail, header) ? MeasuredQuantity.MainsVoltage
        : null;

    private bool Configure(MeasuredQuantity function, string[] arguments)
    {
        _function = function;
        _ranges[(int)function] = null;
        return arguments.Length == 0 || SetRange(function, arguments);
    }

    private bool SetRange(MeasuredQuantity function, string[] arguments)
    {
        var largest = function == MeasuredQuantity.LineCurrent ? _options.CurrentRange : _options.VoltageRange;
        if (arguments is ["DEF" or "DEFault" or "AUTO", ..])
        {
            _ranges[(int)function] = null;
            return true;
        }

        if (arguments.Length == 0 || !double.TryParse(arguments[0], NumberStyles.Float, CultureInfo.InvariantCulture, out var range))
        {
            _ = arguments.Length == 0 ? Error(-109, "Missing parameter", CommandError) : Error(-120, "Numeric data error", CommandError);
            return false;
        }

        if (range <= 0 || range > largest)
        {
            Error(-222, "Data out of range", ExecutionError);
            return false;
        }

        _ranges[(int)function] = range;
        return true;
    }

    private async Task<string> MeasureAsync()
    {
        await StartAsync();
        return Number(_last!.Value);
    }

    private async Task StartAsync() => _last = await _measure(_function, _ranges[(int)_function]);

    private string? Error(int number, string text, int statusBit)
    {
        _status |= statusBit;
        _errors.Add(number, text);
        return null;
    }

    /// <summary>Switched off and on: everything a client has set is lost.</summary>
    public void PowerUp()
    {
        _errors.Clear();
        _status = PowerOn;
        Reset();
    }

    private void Reset()
    {
        _function = _options.Quantity;
        Array.Clear(_ranges);
        _last = null;
    }

    private static string Number(double value) => double.IsPositiveInfinity(value)
        ? "+9.90000000E+37"
        : value.ToString("+0.00000000E+00;-0.00000000E+00;+0.00000000E+00", CultureInfo.InvariantCulture);
}
