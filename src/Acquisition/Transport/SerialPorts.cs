using System.IO.Ports;

namespace Lampwarden.Acquisition.Transport;

/// <summary>The serial ports of this computer.</summary>
public static class SerialPorts
{
    private const string StableNames = "/dev/serial/by-id";

    /// <summary>Names to put in a configuration, the ones that survive replugging first. Never throws; may be empty.</summary>
    public static IReadOnlyList<string> List()
    {
        var names = new List<string>();
        try
        {
            if (Directory.Exists(StableNames))
            {
                names.AddRange(Directory.EnumerateFileSystemEntries(StableNames).Order(StringComparer.Ordinal));
            }

            names.AddRange(SerialPort.GetPortNames().Distinct(StringComparer.Ordinal).Order(StringComparer.Ordinal));
        }
        catch (Exception error) when (error is IOException or UnauthorizedAccessException or PlatformNotSupportedException)
        {
            // A list that cannot be had is an empty list: it only serves to help in messages.
        }

        return names;
    }
}
