using System.Text;
using System.Text.RegularExpressions;

namespace Lampwarden.Host.Reporting;

/// <summary>Finds the check sum that a report carries.</summary>
public static partial class ReportVerification
{
    /// <summary>Stands before the check sum in both forms of a report.</summary>
    public const string Mark = "readings-sha256:";

    /// <summary>The check sum in a report's file or in a text; null where there is none.</summary>
    /// <param name="fileOrDigest">A PDF or HTML that 'report' wrote, or the 64 digits themselves.</param>
    public static string? Find(string fileOrDigest)
    {
        if (Digits().IsMatch(fileOrDigest))
        {
            return fileOrDigest.ToLowerInvariant();
        }

        // Latin-1 keeps every byte of a PDF a character, and our mark is ASCII in both forms.
        var found = Marked().Match(File.ReadAllText(fileOrDigest, Encoding.Latin1));
        return found.Success ? found.Groups[1].Value : null;
    }

    [GeneratedRegex("^[0-9a-fA-F]{64}$")]
    private static partial Regex Digits();

    [GeneratedRegex($"{Mark}([0-9a-f]{{64}})")]
    private static partial Regex Marked();
}
