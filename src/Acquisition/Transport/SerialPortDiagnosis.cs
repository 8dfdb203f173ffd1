using System.Runtime.InteropServices;
using System.Text;

namespace Lampwarden.Acquisition.Transport;

/// <summary>Tells why a serial port would not open, since System.IO.Ports answers most causes with one exception.</summary>
internal static partial class SerialPortDiagnosis
{
    private const int ReadAndWrite = 4 | 2;
    private const int CurrentDirectory = -100; // AT_FDCWD
    private const uint WantGroup = 0x10;       // STATX_GID
    private const int GroupOffset = 24;        // of stx_gid in struct statx, the same on every Linux architecture (statx(2))

    public static TransportException Explain(TransportOptions options, Exception error)
    {
        var port = options.Port;
        if (error is ArgumentException && error is not ArgumentNullException && Exists(port))
        {
            return new TransportException(GapReason.PortMissing,
                FormattableString.Invariant($"{port} does not take {options.BaudRate} baud, {options.DataBits} data bits, parity {options.Parity}, {options.StopBits} stop bits: {error.Message} Choose what the meter's manual says, and a cable that can do it."),
                error);
        }

        if (!Exists(port))
        {
            return new TransportException(GapReason.PortMissing,
                $"There is no port {port}. Is the cable plugged in? A name under /dev/serial/by-id/ stays the same when it is plugged in elsewhere. {PortsFound()}", error);
        }

        if (OperatingSystem.IsLinux() && Access(port, ReadAndWrite) != 0)
        {
            var group = GroupOf(port);
            return new TransportException(GapReason.PermissionDenied,
                $"This user may not open {port}. It belongs to the group {group ?? "of its owner"}: sudo usermod -aG {group ?? "dialout"} $USER, then log in again.", error);
        }

        if (error is UnauthorizedAccessException)
        {
            return new TransportException(GapReason.PortBusy,
                $"{port} is there but another program holds it, or it is no serial port ({error.Message}). Close the other program; fuser {port} names it.", error);
        }

        return new TransportException(GapReason.Disconnected, $"{port} would not open: {error.Message}", error);
    }

    /// <summary>The serial ports the system lists, in one sentence.</summary>
    public static string PortsFound()
    {
        var names = SerialPorts.List();
        return names.Count == 0 ? "No serial ports were found." : $"Ports found: {string.Join(", ", names)}.";
    }

    private static bool Exists(string port) => OperatingSystem.IsWindows()
        ? SerialPorts.List().Contains(port, StringComparer.OrdinalIgnoreCase)
        : File.Exists(port) || Directory.Exists(port);

    private static string? GroupOf(string path)
    {
        Span<byte> status = stackalloc byte[256];
        if (StatX(CurrentDirectory, path, 0, WantGroup, status) != 0)
        {
            return null;
        }

        var id = MemoryMarshal.Read<uint>(status[GroupOffset..]).ToString(System.Globalization.CultureInfo.InvariantCulture);
        try
        {
            foreach (var line in File.ReadLines("/etc/group", Encoding.UTF8))
            {
                var fields = line.Split(':');
                if (fields.Length > 2 && fields[2] == id)
                {
                    return fields[0];
                }
            }
        }
        catch (IOException)
        {
            // A system without that file has its groups elsewhere; the number will do.
        }

        return id;
    }

    [LibraryImport("libc", EntryPoint = "access", StringMarshalling = StringMarshalling.Utf8)]
    private static partial int Access(string path, int mode);

    [LibraryImport("libc", EntryPoint = "statx", StringMarshalling = StringMarshalling.Utf8)]
    private static partial int StatX(int directory, string path, int flags, uint mask, Span<byte> status);
}
