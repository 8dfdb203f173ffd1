using System.Runtime.InteropServices;
using System.Text.Json;
using Lampwarden.Host.Alerting;
using Lampwarden.Host.Alerting.Routes;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Unattended;

/// <summary>
/// Takes changed settings into use without touching a run: routes at once; everything else is said to wait for the next
/// start. A file with faults changes nothing. Looks every two seconds, and at once on SIGHUP.
/// </summary>
public sealed class SettingsReload : IAsyncDisposable
{
    private static readonly TimeSpan Between = TimeSpan.FromSeconds(2);

    private readonly string _path;
    private readonly AlertDispatch _dispatch;
    private readonly TimeProvider _time;
    private readonly ILogger _logger;
    private readonly SemaphoreSlim _asked = new(0, 1);
    private readonly CancellationTokenSource _stop = new();
    private readonly PosixSignalRegistration? _signal;
    private readonly Task _loop;
    private readonly LampwardenOptions _inForce;
    private (DateTime Written, long Length) _seen;

    /// <summary>Starts looking.</summary>
    /// <param name="path">The configuration file.</param>
    /// <param name="inForce">As read at the start.</param>
    public SettingsReload(string path, LampwardenOptions inForce, AlertDispatch dispatch, TimeProvider time, ILogger logger)
    {
        (_path, _inForce, _dispatch, _time, _logger) = (path, inForce, dispatch, time, logger);
        _seen = Stamp();
        if (!OperatingSystem.IsWindows())
        {
            _signal = PosixSignalRegistration.Create(PosixSignal.SIGHUP, context =>
            {
                context.Cancel = true;
                Ask();
            });
        }

        _loop = Task.Run(() => RunAsync(_stop.Token));
    }

    /// <summary>Reads the file again now, changed or not.</summary>
    public void Ask()
    {
        lock (_asked)
        {
            if (_asked.CurrentCount == 0)
            {
                _asked.Release();
            }
        }
    }

    /// <inheritdoc/>
    public async ValueTask DisposeAsync()
    {
        _signal?.Dispose();
        await _stop.CancelAsync();
        await _loop;
        _asked.Dispose();
        _stop.Dispose();
    }

    private async Task RunAsync(CancellationToken stop)
    {
        try
        {
            while (true)
            {
                using var either = CancellationTokenSource.CreateLinkedTokenSource(stop);
                var asked = _asked.WaitAsync(either.Token);
                await Task.WhenAny(asked, Task.Delay(Between, _time, either.Token));
                stop.ThrowIfCancellationRequested();
                var wanted = asked.IsCompletedSuccessfully;
                await either.CancelAsync();
                var stamp = Stamp();
                if (!wanted && stamp == _seen)
                {
                    continue;
                }

                _seen = stamp;
                await ReloadAsync();
            }
        }
        catch (OperationCanceledException) when (stop.IsCancellationRequested)
        {
            // The service ends.
        }
    }

    private async Task ReloadAsync()
    {
        try
        {
            var fresh = ConfigurationFile.Load(_path);
            var changed = new List<string>();
            if (!Same(fresh.Alerts.Routes, _inForce.Alerts.Routes) || fresh.Alerts.Instance != _inForce.Alerts.Instance)
            {
                IReadOnlyList<RouteRunner> before = _dispatch.Use(turned => RouteFactory.Make(fresh.Alerts, _time, _logger, turned));
                await Task.WhenAll(before.Select(route => route.DisposeAsync().AsTask()));
                changed.Add("routes are in use");
            }

            (fresh.Alerts.Routes, var routes) = (_inForce.Alerts.Routes, fresh.Alerts.Routes);
            if (!Same(fresh, _inForce))
            {
                changed.Add("other changes wait for the next start, so that no run is lost");
            }

            fresh.Alerts.Routes = routes;
            _inForce.Alerts.Routes = routes;
            Log.SettingsReloaded(_logger, _path, changed.Count == 0 ? "nothing changed" : string.Join("; ", changed));
        }
        catch (ConfigurationException error)
        {
            Log.SettingsRefused(_logger, _path, error.Message);
        }
    }

    private static bool Same<T>(T one, T other) => JsonSerializer.Serialize(one, Json.Compact) == JsonSerializer.Serialize(other, Json.Compact);

    private (DateTime, long) Stamp()
    {
        try
        {
            var file = new FileInfo(_path);
            return file.Exists ? (file.LastWriteTimeUtc, file.Length) : default;
        }
        catch (Exception error) when (error is IOException or UnauthorizedAccessException)
        {
            return default;
        }
    }
}
