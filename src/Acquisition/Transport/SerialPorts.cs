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

    /// <summary>Refuses a port that is not there, before anything else is begun. A port that is busy or forbidden shows when it is opened.</summary>
    /// <param name="port">A device path or name.</param>
    /// <exception cref="TransportException">There is no such port; the message names those found.</exception>
    public static void EnsurePresent(string port)
    {
        var present = OperatingSystem.IsWindows() ? List().Contains(port, StringComparer.OrdinalIgnoreCase) : File.Exists(port);
        if (!present)
        {
            throw SerialPortDiagnosis.Explain(new TransportOptions { Port = port }, new FileNotFoundException(port));
        }
    }
}
