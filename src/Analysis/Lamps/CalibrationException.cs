namespace Lampwarden.Analysis.Lamps;

/// <summary>A lamp's calibration that cannot be true. The message says what came out, what is possible, and the likely causes.</summary>
public sealed class CalibrationException : ArgumentException
{
    /// <param name="lampName">Whose calibration.</param>
    /// <param name="message">The whole message.</param>
    public CalibrationException(string lampName, string message)
        : base(message) => LampName = lampName;

    /// <summary>Whose calibration.</summary>
    public string LampName { get; }
}
