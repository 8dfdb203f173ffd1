using System.Collections;
using System.ComponentModel.DataAnnotations;
using System.Globalization;
using System.Reflection;
using System.Text.Json;
using Microsoft.Extensions.Configuration;

namespace Lampwarden.Host.Configuration;

/// <summary>
/// Binds a configuration section to an options object and collects every fault on the way: unknown keys, values of
/// the wrong kind, values outside the range declared on the option. The framework's binder stops at the first.
/// </summary>
internal sealed class StrictBinder(List<Fault> faults)
{
    /// <summary>Fills <paramref name="target"/> from <paramref name="section"/>; what is missing keeps its default.</summary>
    public void Bind(IConfiguration section, object target, string path)
    {
        var properties = target.GetType().GetProperties().Where(property => property.SetMethod is { IsPublic: true })
            .ToDictionary(Name, StringComparer.OrdinalIgnoreCase);
        foreach (var child in section.GetChildren())
        {
            var key = path.Length == 0 ? child.Key : $"{path}.{child.Key}";
            if (properties.TryGetValue(child.Key, out var property))
            {
                BindProperty(child, target, property, path.Length == 0 ? Name(property) : $"{path}.{Name(property)}");
            }
            else if (child.Key != "$schema")
            {
                faults.Add(new Fault(key, child.Value, $"no such key; expected one of {string.Join(", ", properties.Keys)}"));
            }
        }

        foreach (var property in properties.Values)
        {
            Check(property, property.GetValue(target), path.Length == 0 ? Name(property) : $"{path}.{Name(property)}");
        }
    }

    /// <summary>The key of a property: camelCase, as the file writes it.</summary>
    public static string Name(PropertyInfo property) => JsonNamingPolicy.CamelCase.ConvertName(property.Name);

    private void BindProperty(IConfigurationSection child, object target, PropertyInfo property, string key)
    {
        var type = Nullable.GetUnderlyingType(property.PropertyType) ?? property.PropertyType;
        var hasChildren = child.GetChildren().Any();
        if (type.IsGenericType && typeof(IEnumerable).IsAssignableFrom(type) && type != typeof(string))
        {
            if (!hasChildren && !string.IsNullOrEmpty(child.Value))
            {
                faults.Add(new Fault(key, child.Value, "expected a list in brackets"));
                return;
            }

            property.SetValue(target, BindList(child, type.GetGenericArguments()[0], key));
        }
        else if (type.IsClass && type != typeof(string))
        {
            if (!hasChildren)
            {
                if (!string.IsNullOrEmpty(child.Value))
                {
                    faults.Add(new Fault(key, child.Value, "expected an object in braces"));
                }

                return;
            }

            var value = property.GetValue(target) ?? Activator.CreateInstance(type)!;
            property.SetValue(target, value);
            Bind(child, value, key);
        }
        else if (hasChildren)
        {
            faults.Add(new Fault(key, null, $"expected {Describe(type)}, not an object or a list"));
        }
        else if (TryConvert(child.Value, type, out var value))
        {
            property.SetValue(target, value);
        }
        else
        {
            faults.Add(new Fault(key, child.Value, $"expected {Describe(type)}"));
        }
    }

    private IList BindList(IConfigurationSection section, Type element, string key)
    {
        var list = (IList)Activator.CreateInstance(typeof(List<>).MakeGenericType(element))!;
        foreach (var child in section.GetChildren())
        {
            var childKey = $"{key}[{child.Key}]";
            if (element == typeof(string))
            {
                list.Add(child.Value ?? "");
            }
            else
            {
                var item = Activator.CreateInstance(element)!;
                Bind(child, item, childKey);
                list.Add(item);
            }
        }

        return list;
    }

    private void Check(PropertyInfo property, object? value, string key)
    {
        if (faults.Exists(fault => fault.Key == key))
        {
            return;
        }

        var context = new ValidationContext(this);
        foreach (var rule in property.GetCustomAttributes<ValidationAttribute>())
        {
            if (rule.GetValidationResult(value, context) != ValidationResult.Success)
            {
                faults.Add(new Fault(key, Text(value), RuleText(rule)));
                return;
            }
        }
    }

    private static string RuleText(ValidationAttribute rule) => rule switch
    {
        RangeAttribute range => string.Create(CultureInfo.InvariantCulture, $"must lie between {range.Minimum} and {range.Maximum}"),
        AllowedValuesAttribute allowed => $"must be one of {string.Join(", ", allowed.Values.Where(item => item is not null).Select(Text))}",
        RequiredAttribute => "must be given",
        UrlAttribute => "must be a full address such as http://127.0.0.1:8086",
        RegularExpressionAttribute pattern => $"must match {pattern.Pattern}",
        _ => rule.FormatErrorMessage("value"),
    };

    private static string? Text(object? value) => value is null ? null : Convert.ToString(value, CultureInfo.InvariantCulture);

    private static string Describe(Type type) => type switch
    {
        _ when type == typeof(double) => "a number with a decimal point",
        _ when type == typeof(int) => "a whole number",
        _ when type == typeof(bool) => "true or false",
        { IsEnum: true } => "one of " + string.Join(", ", Enum.GetNames(type).Select(JsonNamingPolicy.CamelCase.ConvertName)),
        _ => "a text",
    };

    private static bool TryConvert(string? text, Type type, out object? value)
    {
        value = null;
        if (string.IsNullOrEmpty(text))
        {
            value = type == typeof(string) ? text : null;
            return text is null || type == typeof(string);
        }

        if (type == typeof(string))
        {
            value = text;
        }
        else if (type == typeof(double) && double.TryParse(text, NumberStyles.Float, CultureInfo.InvariantCulture, out var number) && double.IsFinite(number))
        {
            value = number;
        }
        else if (type == typeof(int) && int.TryParse(text, NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture, out var whole))
        {
            value = whole;
        }
        else if (type == typeof(bool) && bool.TryParse(text, out var flag))
        {
            value = flag;
        }
        else if (type.IsEnum && Enum.TryParse(type, text, ignoreCase: true, out var named) && !char.IsAsciiDigit(text[0]))
        {
            value = named;
        }

        return value is not null;
    }
}
