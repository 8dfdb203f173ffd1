namespace Lampwarden.Host.Commands;

/// <summary>What the process answers; contract.</summary>
internal static class ExitCode
{
    /// <summary>Done.</summary>
    public const int Done = 0;

    /// <summary>It ran, but the answer is no: a failed verdict, a bank that cannot run the unit, a fault not found.</summary>
    public const int No = 1;

    /// <summary>Bad input or configuration.</summary>
    public const int BadInput = 2;

    /// <summary>Instrument or storage trouble.</summary>
    public const int Trouble = 3;

    /// <summary>Interrupted by the user or the system.</summary>
    public const int Interrupted = 130;
}
