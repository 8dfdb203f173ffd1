using Lampwarden.Analysis.Watching;

namespace Lampwarden.Host.Alerting.CutOff;

/// <summary>What only a person may do: arm it again.</summary>
public sealed partial class CutOffUnit
{
    /// <summary>A person resets it after looking.</summary>
    /// <returns>Null: it is armed again. Otherwise why not.</returns>
    public string? Reset(string by)
    {
        lock (_gate)
        {
            if (_state.Position == CutOffPosition.Armed)
            {
                return "it is armed";
            }

            if (_standing.Count > 0)
            {
                return $"the finding still stands: {_standing.Values.First().Finding.Signature.Text()}";
            }

            Become(new CutOffState(CutOffPosition.Armed, _time.GetUtcNow(), $"reset by {by}"), new { utc = _time.GetUtcNow(), bench = Bench, what = "reset", by });
            _openSent = false;
            _around.Clear(AlertCauses.CutOff, Subject);
        }

        Log.CutOffReset(_logger, Bench, by);
        _wake.Release();
        return null;
    }

    private void TakeResetWish()
    {
        if (!File.Exists(_file.ResetPath))
        {
            return;
        }

        try
        {
            var by = File.ReadAllText(_file.ResetPath).Trim();
            if (Reset(by.Length == 0 ? "somebody" : by) is { } why)
            {
                Log.CutOffNotReset(_logger, Bench, why);
            }

            // Last: whoever waits for it to go finds the new state.
            File.Delete(_file.ResetPath);
        }
        catch (Exception error) when (error is IOException or UnauthorizedAccessException)
        {
            Log.CutOffNotReset(_logger, Bench, error.Message);
        }
    }
}
