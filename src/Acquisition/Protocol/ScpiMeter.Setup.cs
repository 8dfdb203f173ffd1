using System.Globalization;
using System.Text;
using Lampwarden.Acquisition.Transport;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>Setting up after opening, the error queue and the event status, and getting back into step.</summary>
internal sealed partial class ScpiMeter
{
    private const string AskIdentity = "*IDN?";
    private const string AskError = "SYSTem:ERRor?";
    private const string AskStatus = "*ESR?";
    private const int PowerOn = 128;       // IEEE 488.2, standard event status register
    private const int AnyError = 4 | 8 | 16 | 32;
    private const int MostErrors = 32;     // an error queue holds about 20; a meter that never says 0 must not hold us up
    private const int MostUnanswered = 3;  // once may be a stutter; a meter that has no such register costs a reply timeout each time
    private const int MostFailedSteps = 5; // then the wire itself is opened anew
    private string? _identity;
    private bool _sure; // the identity was heard twice
    private bool _hasErrorQueue = true;
    private bool _hasStatus = true;
    private int _statusUnanswered;
    private long _lastCheck;

    private async Task PrepareAsync(ScpiDialogue dialogue, Station station, CancellationToken cancellationToken)
    {
        _outOfStep = true;
        if (!station.Options.Protocol.Identify)
        {
            _hasErrorQueue = _hasStatus = false; // not a meter of IEEE 488.2
            await SetUpAsync(dialogue, cancellationToken);
            return;
        }

        // What the meter still had to say to an earlier user is no answer to us.
        await dialogue.SendAsync("*CLS", cancellationToken);
        await StepAsync(dialogue, station, cancellationToken);
    }

    /// <summary>
    /// Makes sure that the next answer belongs to the next question: asks for the identity and refuses every line before it. Then sends the
    /// set-up again, because a meter that fell silent may have been switched off and on. Meters without *IDN? are waited out instead.
    /// </summary>
    /// <returns>False when that failed; the poll's gap is then given.</returns>
    private async Task<bool> ResynchroniseAsync(ScpiDialogue dialogue, Station station, CancellationToken cancellationToken)
    {
        var refused = dialogue.RefuseUnasked();
        if (await StepAsync(dialogue, station, cancellationToken))
        {
            return true;
        }

        if (++_failedSteps >= MostFailedSteps && refused > 0)
        {
            throw new TransportException(GapReason.StaleAnswer, "the meter's answers do not follow our questions; the connection is being opened anew");
        }

        NoAnswer(dialogue, station, station.Options.Protocol.Identify ? AskIdentity : "for silence");
        return false;
    }

    private async Task<bool> StepAsync(ScpiDialogue dialogue, Station station, CancellationToken cancellationToken)
    {
        var identify = station.Options.Protocol.Identify;
        dialogue.RefuseUnasked();
        var next = identify ? await dialogue.AskAsync(AskIdentity, cancellationToken) : await dialogue.NextAsync(cancellationToken);
        for (var lines = 0; lines < MostErrors && next is { } answer; lines++, next = await dialogue.NextAsync(cancellationToken))
        {
            if (identify && IsIdentity(answer))
            {
                answer.PassOver();
                if (!_sure)
                {
                    // The first answer may belong to another user's question, and noise can look like a name: the same twice is one.
                    _sure = true;
                    return await StepAsync(dialogue, station, cancellationToken);
                }

                return await SetUpAsync(dialogue, cancellationToken);
            }

            answer.Refuse(GapReason.StaleAnswer);
            if (_sure && _failedSteps > 0)
            {
                (_sure, _identity) = (false, null); // perhaps another meter hangs on the wire now
            }
        }

        // With nothing to ask for, a whole reply timeout of silence is what can be had.
        return !identify && dialogue.RefuseUnasked() == 0 && await SetUpAsync(dialogue, cancellationToken);
    }

    private bool IsIdentity(Answer answer)
    {
        var text = answer.ToString();
        if (!_sure)
        {
            // Printable, and four fields by the standard; real meters send fewer or more. A number or an entry of the error queue it never is.
            if (text.Length < 4 || text.Any(one => one is < ' ' or > '~') || !text.Any(char.IsAsciiLetter) || TryReadError(answer.Text, out _) || ScpiNumber.Read(answer.Bytes).Kind != MeterEventKind.Gap)
            {
                return false;
            }

            _identity = text;
        }

        if (text != _identity)
        {
            return false;
        }

        foreach (var station in _line.Stations)
        {
            station.Health.Identified(text);
        }

        return true;
    }

    private async Task<bool> SetUpAsync(ScpiDialogue dialogue, CancellationToken cancellationToken)
    {
        foreach (var command in _line.Stations.SelectMany(station => station.Options.Protocol.SetUp).Distinct())
        {
            await dialogue.SendAsync(command, cancellationToken);
            if (_hasErrorQueue && !await DrainErrorsAsync(dialogue, $"'{command}'", cancellationToken))
            {
                return false;
            }
        }

        _lastCheck = _time.GetTimestamp();
        _outOfStep = false;
        _failedSteps = 0;
        return true;
    }

    /// <summary>Asks now and then whether the meter was switched off and on between two polls, which would have undone its set-up, and drains its errors.</summary>
    private async Task<bool> HasRestartedAsync(ScpiDialogue dialogue, Station station, CancellationToken cancellationToken)
    {
        var every = station.Options.Protocol.StatusSeconds;
        if (!_hasStatus || every <= 0 || _time.GetElapsedTime(_lastCheck).TotalSeconds < every)
        {
            return false;
        }

        _lastCheck = _time.GetTimestamp();
        dialogue.RefuseUnasked();
        var reply = await dialogue.AskAsync(AskStatus, cancellationToken);
        if (reply is not { } answer
            || !int.TryParse(answer.ToString(), NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture, out var status))
        {
            reply?.Refuse(GapReason.StaleAnswer);
            _outOfStep = true;
            if (++_statusUnanswered == MostUnanswered)
            {
                _hasStatus = false;
                Tell($"the meter does not answer {AskStatus}; a restart between two polls cannot be seen");
            }

            return false;
        }

        _statusUnanswered = 0;
        answer.PassOver();
        if ((status & AnyError) != 0 && _hasErrorQueue && !await DrainErrorsAsync(dialogue, "polling", cancellationToken))
        {
            return false;
        }

        if ((status & PowerOn) == 0)
        {
            return false;
        }

        _outOfStep = true; // getting back into step sets the meter up
        return true;
    }

    /// <summary>Reads the error queue out and reports it; false when the two sides fell out of step over it.</summary>
    private async Task<bool> DrainErrorsAsync(ScpiDialogue dialogue, string after, CancellationToken cancellationToken)
    {
        for (var count = 0; count < MostErrors; count++)
        {
            if (await dialogue.AskAsync(AskError, cancellationToken) is not { } answer)
            {
                _hasErrorQueue = false;
                _outOfStep = true;
                Tell($"the meter does not answer {AskError}; whether it took {after} cannot be told");
                return false;
            }

            if (!TryReadError(answer.Text, out var number))
            {
                answer.Refuse(GapReason.StaleAnswer);
                _outOfStep = true;
                return false;
            }

            answer.PassOver();
            if (number == 0)
            {
                return true;
            }

            Tell($"after {after} the meter reports {answer}");
        }

        return true;
    }

    private void Tell(string problem)
    {
        foreach (var station in _line.Stations)
        {
            station.Health.Problem(problem);
        }
    }

    // <number>,"<text>" (SCPI-1999 volume 2, SYSTem:ERRor).
    private static bool TryReadError(ReadOnlySpan<byte> text, out int number)
    {
        var comma = text.IndexOf((byte)',');
        number = 0;
        return comma > 0 && int.TryParse(Encoding.ASCII.GetString(text[..comma]),
            NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture, out number);
    }
}
