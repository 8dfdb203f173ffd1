using System.Globalization;
using System.Runtime.InteropServices;
using Lampwarden.Acquisition.Tests.Support;
using Lampwarden.Acquisition.Transport;

namespace Lampwarden.Acquisition.Tests.Transport;

public sealed partial class SerialTransportTests
{
    private const int Nobody = 65534;

    [Fact]
    public async Task OpenAsync_MissingPort_SaysWhatIsThere()
    {
        var error = await Refused("/dev/serial/by-id/usb-not-there", GapReason.PortMissing);

        Assert.Contains("A name under /dev/serial/by-id/ stays the same", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public async Task OpenAsync_PortHeldByAnother_SaysBusy()
    {
        await using var port = TestBench.NewTerminal();
        await using var first = await new SerialTransport(new TransportOptions { Port = port.Place }).OpenAsync(TestContext.Current.CancellationToken);
        SetMode(port.SlavePath!, UnixFileMode.UserRead | UnixFileMode.UserWrite | UnixFileMode.GroupRead | UnixFileMode.GroupWrite | UnixFileMode.OtherRead | UnixFileMode.OtherWrite);

        // The system lets root open a port twice, so root is not who should try.
        var error = await AsNobody(() => Assert.Throws<TransportException>(() => new SerialTransport(new TransportOptions { Port = port.SlavePath! }).Open()));

        Assert.Equal(GapReason.PortBusy, error.Reason);
        Assert.Contains("another program holds it", error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public async Task OpenAsync_NoSerialPort_IsRefusedWithoutHarm()
    {
        var file = Path.GetTempFileName();
        await File.WriteAllTextAsync(file, "a file", TestContext.Current.CancellationToken);

        var error = await Refused(file, GapReason.PortBusy);

        Assert.Contains("or it is no serial port", error.Message, StringComparison.Ordinal);
        Assert.Equal("a file", await File.ReadAllTextAsync(file, TestContext.Current.CancellationToken));
        File.Delete(file);
    }

    [Fact]
    public async Task OpenAsync_PortOfAnotherGroup_NamesTheGroupToJoin()
    {
        Assert.SkipUnless(OperatingSystem.IsLinux(), "file permissions of ports are a matter of Linux");
        await using var port = TestBench.NewTerminal();
        SetMode(port.SlavePath!, UnixFileMode.None);

        var error = await AsNobody(() => Assert.Throws<TransportException>(() => new SerialTransport(new TransportOptions { Port = port.SlavePath! }).Open()));

        Assert.Equal(GapReason.PermissionDenied, error.Reason);
        Assert.Matches("This user may not open /dev/pts/.* It belongs to the group [a-z]+: sudo usermod -aG [a-z]+ ", error.Message);
    }

    [Fact]
    public async Task OpenAsync_LinesThePortDoesNotHave_AreReportedAndNoObstacle()
    {
        await using var port = TestBench.NewTerminal();
        var transport = new SerialTransport(new TransportOptions { Port = port.Place, Dtr = true, Rts = false });

        await using var connection = await transport.OpenAsync(TestContext.Current.CancellationToken);

        Assert.Contains("has no", transport.Shortcoming, StringComparison.Ordinal);
    }

    [Fact]
    public async Task DisposeAsync_AfterHangUpAndAWrite_DoesNotHang()
    {
        // Closing the port first would wait for ever here: see the list at SerialTransport.
        await using var port = TestBench.NewTerminal();
        for (var round = 0; round < 20; round++)
        {
            var connection = await new SerialTransport(new TransportOptions { Port = port.Place }).OpenAsync(TestContext.Current.CancellationToken);
            port.Unplug();
            try
            {
                await connection.Stream.WriteAsync("READ?\n"u8.ToArray(), TestContext.Current.CancellationToken);
            }
            catch (Exception error) when (error is IOException or ObjectDisposedException)
            {
                // Either is a fair answer to writing into nothing.
            }

            await connection.DisposeAsync().AsTask().WaitAsync(TestBench.Deadline, TestContext.Current.CancellationToken);
            port.PlugIn();
        }
    }

    private static void SetMode(string path, UnixFileMode mode)
    {
        if (!OperatingSystem.IsWindows())
        {
            File.SetUnixFileMode(path, mode);
        }
    }

    private static async Task<TransportException> Refused(string port, GapReason reason)
    {
        var error = await Assert.ThrowsAsync<TransportException>(() => new SerialTransport(new TransportOptions { Port = port }).OpenAsync(TestContext.Current.CancellationToken));
        Assert.Equal(reason, error.Reason);
        return error;
    }

    /// <summary>Runs on a thread of its own that has given up root's rights where it had them; on Linux they belong to the thread.</summary>
    private static Task<T> AsNobody<T>(Func<T> work)
    {
        var result = new TaskCompletionSource<T>(TaskCreationOptions.RunContinuationsAsynchronously);
        var thread = new Thread(() =>
        {
            try
            {
                if (OperatingSystem.IsLinux() && Environment.IsPrivilegedProcess)
                {
                    var setResUid = RuntimeInformation.ProcessArchitecture == Architecture.Arm64 ? 147 : 117;
                    Assert.Equal(0, SystemCall(setResUid, Nobody, Nobody, Nobody));
                }

                result.SetResult(work());
            }
            catch (Exception error)
            {
                result.SetException(error);
            }
        });
        thread.Start();
        return result.Task;
    }

    [LibraryImport("libc", EntryPoint = "syscall", SetLastError = true)]
    private static partial nint SystemCall(nint number, nint real, nint effective, nint saved);
}
