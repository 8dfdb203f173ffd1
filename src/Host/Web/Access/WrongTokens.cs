using System.Net;

namespace Lampwarden.Host.Web.Access;

/// <summary>
/// Counts wrong tokens: after <see cref="Allowed"/> within <see cref="Window"/> from one address, that address must wait, even
/// with the right token, or the wait would tell which token is right. Thread-safe; remembers a bounded number of addresses.
/// </summary>
public sealed class WrongTokens(TimeProvider time)
{
    /// <summary>Wrong tokens that one address may send within <see cref="Window"/>.</summary>
    public const int Allowed = 5;

    /// <summary>Wrong tokens that all addresses together may send within <see cref="Window"/>.</summary>
    public const int AllowedTogether = 60;

    /// <summary>How long a wrong token counts.</summary>
    public static readonly TimeSpan Window = TimeSpan.FromMinutes(1);

    private const int MostAddresses = 1000;

    private readonly Lock _gate = new();
    private readonly Dictionary<IPAddress, Queue<long>> _byAddress = [];
    private readonly Queue<long> _together = new();

    /// <summary>How long this address has to wait; zero for not at all.</summary>
    public TimeSpan WaitFor(IPAddress address)
    {
        lock (_gate)
        {
            var own = _byAddress.TryGetValue(Subnet(address), out var times) ? Left(times, Allowed) : TimeSpan.Zero;
            var all = Left(_together, AllowedTogether);
            return own > all ? own : all;
        }
    }

    /// <summary>Counts one.</summary>
    public void Count(IPAddress address)
    {
        lock (_gate)
        {
            if (_byAddress.Count >= MostAddresses)
            {
                Forget();
            }

            var now = time.GetTimestamp();
            var key = Subnet(address);
            if (!_byAddress.TryGetValue(key, out var times))
            {
                _byAddress[key] = times = new Queue<long>();
            }

            times.Enqueue(now);
            _together.Enqueue(now);
        }
    }

    // One machine has a whole /64 of IPv6 to itself, so single addresses would be no limit there.
    private static IPAddress Subnet(IPAddress address)
    {
        if (address.IsIPv4MappedToIPv6)
        {
            return address.MapToIPv4();
        }

        var bytes = address.GetAddressBytes();
        if (bytes.Length == 16)
        {
            bytes.AsSpan(8).Clear();
        }

        return new IPAddress(bytes);
    }

    private TimeSpan Left(Queue<long> times, int allowed)
    {
        while (times.TryPeek(out var oldest) && time.GetElapsedTime(oldest) >= Window)
        {
            times.Dequeue();
        }

        return times.Count >= allowed ? Window - time.GetElapsedTime(times.Peek()) : TimeSpan.Zero;
    }

    private void Forget()
    {
        foreach (var (address, times) in _byAddress.ToList())
        {
            Left(times, int.MaxValue);
            if (times.Count == 0)
            {
                _byAddress.Remove(address);
            }
        }

        if (_byAddress.Count >= MostAddresses)
        {
            // A flood from a thousand addresses: the limit on all together holds meanwhile.
            _byAddress.Clear();
        }
    }
}
