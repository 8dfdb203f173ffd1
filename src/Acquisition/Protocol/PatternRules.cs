using System.ComponentModel.DataAnnotations;
using System.Text.RegularExpressions;

namespace Lampwarden.Acquisition.Protocol;

/// <summary>Empty, or a .NET regular expression that can be read.</summary>
[AttributeUsage(AttributeTargets.Property)]
internal class RegularExpressionRuleAttribute : ValidationAttribute
{
    /// <inheritdoc/>
    public override bool IsValid(object? value)
    {
        if (value is not string { Length: > 0 } text)
        {
            return true;
        }

        try
        {
            return IsValid(LinePattern.Compile(text));
        }
        catch (RegexParseException error)
        {
            ErrorMessage = $"must be a .NET regular expression: {error.Message}".Replace("{", "{{", StringComparison.Ordinal).Replace("}", "}}", StringComparison.Ordinal);
            return false;
        }
    }

    /// <summary>Further rules on a pattern that can be read.</summary>
    protected virtual bool IsValid(Regex pattern) => true;
}

/// <summary>Empty, or a .NET regular expression with a group named value.</summary>
[AttributeUsage(AttributeTargets.Property)]
internal sealed class LinePatternRuleAttribute : RegularExpressionRuleAttribute
{
    /// <inheritdoc/>
    protected override bool IsValid(Regex pattern)
    {
        ErrorMessage = "must have a group named value, such as ^(?<value>[-+0-9.]+) *(?<unit>mA|A)$";
        return pattern.GroupNumberFromName("value") >= 0;
    }
}
