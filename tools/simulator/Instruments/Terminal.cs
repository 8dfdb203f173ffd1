using System.Runtime.InteropServices;
using System.Text;

namespace Lampwarden.Simulator.Instruments;

/// <summary>The system calls behind a pseudo-terminal: posix_openpt(3), grantpt(3), unlockpt(3), ptsname_r(3), cfmakeraw(3), poll(2).</summary>
internal static partial class Terminal
{
    public const short PollIn = 1;
    public const short PollOut = 4;
    public const short PollHangUp = 0x10;
    public const int TryAgainLinux = 11; // EAGAIN
    public const int TryAgainMac = 35;
    private const int ReadWrite = 2;
    private const int StatusFlags = 4;   // F_SETFL
    private static readonly int NoControllingTerminal = OperatingSystem.IsMacOS() ? 0x20000 : 0x100;
    private static readonly int NonBlocking = OperatingSystem.IsMacOS() ? 0x4 : 0x800;
    private static readonly int CloseOnExec = OperatingSystem.IsMacOS() ? 0x1000000 : 0x80000;

    /// <summary>Opens a raw pseudo-terminal; both descriptors are ours, the slave's stays open so that a client may come and go.</summary>
    /// <exception cref="IOException">The system has no more pseudo-terminals, or none at all.</exception>
    public static (int Master, int Slave, string SlavePath) Open()
    {
        var master = Check(PosixOpenPt(ReadWrite | NoControllingTerminal | (OperatingSystem.IsLinux() ? CloseOnExec : 0)), "posix_openpt");
        Check(GrantPt(master), "grantpt");
        Check(UnlockPt(master), "unlockpt");
        Span<byte> name = stackalloc byte[256];
        Check(PtsName(master, name, (nuint)name.Length) == 0 ? 0 : -1, "ptsname_r");
        var path = Encoding.UTF8.GetString(name[..name.IndexOf((byte)0)]);
        var slave = Check(OpenFile(path, ReadWrite | NoControllingTerminal | CloseOnExec), "open");

        // struct termios is 60 bytes on Linux and 72 on macOS; it is only handed from one call to the next.
        Span<byte> settings = stackalloc byte[256];
        Check(TcGetAttr(slave, settings), "tcgetattr");
        CfMakeRaw(settings);
        Check(TcSetAttr(slave, 0, settings), "tcsetattr");
        Check(Fcntl(master, StatusFlags, NonBlocking), "fcntl");
        return (master, slave, path);
    }

    /// <summary>Waits for one descriptor to be ready, or for a wake-up on the other; milliseconds, -1 for ever.</summary>
    public static (short Ready, short Woken) Wait(int descriptor, short events, int wake, int milliseconds)
    {
        Span<PollRequest> requests = [new() { Descriptor = descriptor, Events = events }, new() { Descriptor = wake, Events = PollIn }];
        Poll(requests, (nuint)requests.Length, milliseconds);
        return (requests[0].Returned, requests[1].Returned);
    }

    private static int Check(int result, string call) => result >= 0
        ? result
        : throw new IOException($"{call} failed ({Marshal.GetLastPInvokeErrorMessage()}): no pseudo-terminal is to be had here. Use TCP instead (--tcp PORT).");

    [StructLayout(LayoutKind.Sequential)]
    private struct PollRequest
    {
        public int Descriptor;
        public short Events;
        public short Returned;
    }

    [LibraryImport("libc", EntryPoint = "posix_openpt", SetLastError = true)]
    private static partial int PosixOpenPt(int flags);

    [LibraryImport("libc", EntryPoint = "grantpt", SetLastError = true)]
    private static partial int GrantPt(int master);

    [LibraryImport("libc", EntryPoint = "unlockpt", SetLastError = true)]
    private static partial int UnlockPt(int master);

    [LibraryImport("libc", EntryPoint = "ptsname_r", SetLastError = true)]
    private static partial int PtsName(int master, Span<byte> name, nuint length);

    [LibraryImport("libc", EntryPoint = "open", SetLastError = true, StringMarshalling = StringMarshalling.Utf8)]
    private static partial int OpenFile(string path, int flags);

    [LibraryImport("libc", EntryPoint = "tcgetattr", SetLastError = true)]
    private static partial int TcGetAttr(int descriptor, Span<byte> settings);

    [LibraryImport("libc", EntryPoint = "tcsetattr", SetLastError = true)]
    private static partial int TcSetAttr(int descriptor, int when, Span<byte> settings);

    [LibraryImport("libc", EntryPoint = "cfmakeraw")]
    private static partial void CfMakeRaw(Span<byte> settings);

    [LibraryImport("libc", EntryPoint = "fcntl", SetLastError = true)]
    private static partial int Fcntl(int descriptor, int command, int argument);

    [LibraryImport("libc", EntryPoint = "poll", SetLastError = true)]
    private static partial int Poll(Span<PollRequest> requests, nuint count, int milliseconds);

    [LibraryImport("libc", EntryPoint = "pipe", SetLastError = true)]
    public static partial int Pipe(Span<int> ends);

    [LibraryImport("libc", EntryPoint = "read", SetLastError = true)]
    public static partial nint Read(int descriptor, Span<byte> buffer, nuint count);

    [LibraryImport("libc", EntryPoint = "write", SetLastError = true)]
    public static partial nint Write(int descriptor, ReadOnlySpan<byte> buffer, nuint count);

    [LibraryImport("libc", EntryPoint = "close", SetLastError = true)]
    public static partial int Close(int descriptor);
}
