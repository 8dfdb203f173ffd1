using System.Diagnostics;
using System.Net;
using System.Net.Sockets;

namespace Lampwarden.Host.Tests.Recording.Forwarding;

/// <summary>A database server on loopback, on a free port, over a folder of its own; it can be killed and started again.</summary>
internal abstract class ServerProcess : IDisposable
{
    private readonly string _program;
    private Process? _process;

    protected ServerProcess(string program)
    {
        _program = Outside.Program(program);
        Port = FreePort();
    }

    public int Port { get; }

    public string Url => $"http://127.0.0.1:{Port}";

    protected TempFolder Folder { get; } = new();

    protected HttpClient Http { get; } = new() { Timeout = TimeSpan.FromSeconds(20) };

    public async Task StartAsync()
    {
        var start = new ProcessStartInfo(_program, Arguments()) { RedirectStandardOutput = true, RedirectStandardError = true };
        _process = Process.Start(start)!;
        _ = _process.StandardOutput.ReadToEndAsync();
        var told = _process.StandardError.ReadToEndAsync();
        var patience = Stopwatch.StartNew();
        while (!await AnswersAsync())
        {
            Assert.True(!_process.HasExited && patience.Elapsed < TimeSpan.FromSeconds(60), $"{_program} does not answer: {(_process.HasExited ? await told : "no answer")}");
            await Task.Delay(50);
        }
    }

    /// <summary>As a power cut would: no signal it could answer to.</summary>
    public void Kill()
    {
        _process!.Kill();
        _process.WaitForExit();
        _process.Dispose();
        _process = null;
    }

    public void Dispose()
    {
        if (_process is not null)
        {
            Kill();
        }

        Http.Dispose();
        Folder.Dispose();
    }

    protected abstract string[] Arguments();

    protected abstract string HealthPath { get; }

    protected static int FreePort()
    {
        using var listener = new TcpListener(IPAddress.Loopback, 0);
        listener.Start();
        return ((IPEndPoint)listener.LocalEndpoint).Port;
    }

    private async Task<bool> AnswersAsync()
    {
        try
        {
            using var answer = await Http.GetAsync(new Uri(Url + HealthPath));
            return answer.IsSuccessStatusCode;
        }
        catch (HttpRequestException)
        {
            return false;
        }
    }
}
