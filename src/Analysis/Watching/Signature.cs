namespace Lampwarden.Analysis.Watching;

/// <summary>The shape of a fault in the readings. The written names (hard-short, lamp-out, …) are contract.</summary>
public enum Signature
{
    HardShort,
    DevelopingShort,
    Runaway,
    OpenCircuit,
    Intermittent,
    Cycling,
    SlowInrush,
    OffPrediction,
    LampOut,
    MainsShift,
    MeterSilent,
    MeterStuck,
    MeterOverload,
}

/// <summary>How soon somebody has to look.</summary>
public enum Severity
{
    Notice,
    Warning,
    Critical,
}

/// <summary>What a finished run says about the unit.</summary>
public enum Verdict
{
    Passed,
    Failed,
    Incomplete,
}

/// <summary>The written names used on the command line, in JSON and in the record.</summary>
public static class WatchingNames
{
    /// <summary>The contract's name of a signature, such as <c>developing-short</c>.</summary>
    public static string Text(this Signature signature) => Kebab(signature.ToString());

    /// <summary>The contract's name of a severity, such as <c>critical</c>.</summary>
    public static string Text(this Severity severity) => Kebab(severity.ToString());

    /// <summary>The contract's name of a verdict, such as <c>passed</c>.</summary>
    public static string Text(this Verdict verdict) => Kebab(verdict.ToString());

    /// <summary>The signature of a written name.</summary>
    /// <exception cref="FormatException">The name is none of the thirteen.</exception>
    public static Signature ParseSignature(string text)
    {
        foreach (var signature in Enum.GetValues<Signature>())
        {
            if (signature.Text() == text)
            {
                return signature;
            }
        }

        throw new FormatException($"'{text}' names no signature; expected one of {string.Join(", ", Enum.GetValues<Signature>().Select(Text))}.");
    }

    private static string Kebab(string name) =>
        string.Concat(name.Select((letter, index) =>
            char.IsUpper(letter) ? (index == 0 ? "" : "-") + char.ToLowerInvariant(letter) : letter.ToString()));
}
