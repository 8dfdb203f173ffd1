using System.Text;
using Lampwarden.Acquisition.Transport;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>Setting up after opening, the error queue, and getting back into step.</summary>
internal sealed partial class ScpiMeter
{
    private const string AskIdentity = "*IDN?";
    private const string AskError = "SYSTem:ERRor?";
    private const int MostErrors = 32; // an error queue holds about 20; a meter that never says 0 must not hold us up
    private string? _identity;
    private bool _hasErrorQueue = true;

    private async Task PrepareAsync(ScpiDialogue dialogue, CancellationToken cancellationToken)
    {
        // What the meter still had to say to an earlier user is no answer to us.
        _outOfStep = true;
        _failedSteps = 0;
        await dialogue.SendAsync("*CLS", cancellationToken);
        if (_options.Protocol.Identify)
        {
            await StepAsync(dialogue, cancellationToken);
        }
        else
        {
            _outOfStep = false;
            await SetUpAsync(dialogue, cancellationToken);
        }
    }

    /// <summary>
    /// Makes sure that the next answer belongs to the next question: asks for the identity and refuses every line before it. Then sends the
    /// set-up again, because a meter that fell silent may have been switched off and on. Meters without *IDN? are waited out instead.
    /// </summary>
    private async Task<bool> ResynchroniseAsync(ScpiDialogue dialogue, CancellationToken cancellationToken)
    {
        if (await StepAsync(dialogue, cancellationToken))
        {
            return true;
        }

        if (++_failedSteps >= 5 && dialogue.RefuseUnasked() > 0)
        {
            throw new TransportException(GapReason.StaleAnswer, "the meter's answers do not follow our questions; the connection is being opened anew");
        }

        NoAnswer(dialogue, AskIdentity);
        return false;
    }

    private async Task<bool> StepAsync(ScpiDialogue dialogue, CancellationToken cancellationToken)
    {
        dialogue.RefuseUnasked();
        if (_options.Protocol.Identify)
        {
            await dialogue.SendAsync(AskIdentity, cancellationToken);
        }

        while (await dialogue.NextAsync(cancellationToken) is { } answer)
        {
            if (_options.Protocol.Identify && IsIdentity(answer))
            {
                Health.LinePassedOver();
                return await SetUpAsync(dialogue, cancellationToken);
            }

            Health.LineRefused(GapReason.StaleAnswer);
        }

        // With nothing to ask for, a whole reply timeout of silence is what can be had.
        return !_options.Protocol.Identify && await SetUpAsync(dialogue, cancellationToken);
    }

    private bool IsIdentity(Answer answer)
    {
        var text = answer.ToString();
        if (_identity is null)
        {
            // Four fields by the standard; real meters send fewer or more. A number it is never.
            if (!text.Any(char.IsAsciiLetter) || text.StartsWith('*') || ScpiNumber.Read(answer.Bytes).Kind != MeterEventKind.Gap)
            {
                return false;
            }

            _identity = text;
            Health.Identified(text);
        }

        return text == _identity;
    }

    private async Task<bool> SetUpAsync(ScpiDialogue dialogue, CancellationToken cancellationToken)
    {
        foreach (var command in _options.Protocol.SetUp)
        {
            await dialogue.SendAsync(command, cancellationToken);
            if (_hasErrorQueue && !await DrainErrorsAsync(dialogue, command, cancellationToken))
            {
                return false;
            }
        }

        _outOfStep = false;
        _failedSteps = 0;
        return true;
    }

    /// <summary>Reads the error queue out and reports it; false when the two sides fell out of step over it.</summary>
    private async Task<bool> DrainErrorsAsync(ScpiDialogue dialogue, string after, CancellationToken cancellationToken)
    {
        for (var count = 0; count < MostErrors; count++)
        {
            await dialogue.SendAsync(AskError, cancellationToken);
            if (await dialogue.NextAsync(cancellationToken) is not { } answer)
            {
                _hasErrorQueue = false;
                Health.Problem($"the meter does not answer {AskError}; whether it took '{after}' cannot be told");
                return false;
            }

            if (!TryReadError(answer.Text, out var number))
            {
                Health.LineRefused(GapReason.StaleAnswer);
                return false;
            }

            Health.LinePassedOver();
            if (number == 0)
            {
                return true;
            }

            Health.Problem($"after '{after}' the meter reports {answer}");
        }

        return true;
    }

    // <number>,"<text>" (SCPI-1999 volume 2, SYSTem:ERRor); the number alone is met too.
    private static bool TryReadError(ReadOnlySpan<byte> text, out int number)
    {
        var comma = text.IndexOf((byte)',');
        return int.TryParse(Encoding.ASCII.GetString(comma < 0 ? text : text[..comma]),
            System.Globalization.NumberStyles.AllowLeadingSign, System.Globalization.CultureInfo.InvariantCulture, out number);
    }
}
