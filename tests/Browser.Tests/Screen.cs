namespace Lampwarden.Browser.Tests;

/// <summary>A size to look at the page in.</summary>
internal sealed record Screen(string Name, int Width, int Height)
{
    public static readonly Screen Laptop = new("laptop", 1440, 900);

    public static readonly Screen Phone = new("phone", 390, 844);

    public static Screen Of(string name) => name == Phone.Name ? Phone : Laptop;
}
