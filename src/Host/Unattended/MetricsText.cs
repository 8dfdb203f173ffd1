using System.Diagnostics.Metrics;
using System.Globalization;
using System.Text;

namespace Lampwarden.Host.Unattended;

/// <summary>
/// Keeps the present value of every instrument of <see cref="Telemetry"/> and writes them in the Prometheus text format
/// (version 0.0.4), for shops that scrape and run no collector. Thread-safe.
/// </summary>
public sealed class MetricsText : IDisposable
{
    private readonly Lock _gate = new();
    private readonly MeterListener _listener = new();
    private readonly SortedDictionary<string, Family> _families = new(StringComparer.Ordinal);

    /// <summary>Starts listening.</summary>
    public MetricsText()
    {
        _listener.InstrumentPublished = (instrument, listener) =>
        {
            if (instrument.Meter.Name == Telemetry.MeterName)
            {
                listener.EnableMeasurementEvents(instrument);
            }
        };
        _listener.SetMeasurementEventCallback<long>((instrument, value, tags, _) => Take(instrument, value, tags));
        _listener.SetMeasurementEventCallback<int>((instrument, value, tags, _) => Take(instrument, value, tags));
        _listener.SetMeasurementEventCallback<double>((instrument, value, tags, _) => Take(instrument, value, tags));
        _listener.Start();
    }

    /// <summary>Everything as of now.</summary>
    public string Write()
    {
        _listener.RecordObservableInstruments();
        var text = new StringBuilder();
        lock (_gate)
        {
            foreach (var (name, family) in _families)
            {
                family.Write(text, name);
            }
        }

        return text.ToString();
    }

    /// <inheritdoc/>
    public void Dispose() => _listener.Dispose();

    private void Take(Instrument instrument, double value, ReadOnlySpan<KeyValuePair<string, object?>> tags)
    {
        var counter = instrument is Counter<long> or ObservableCounter<long>;
        var name = instrument.Name.Replace('.', '_') + (instrument.Unit == "s" ? "_seconds" : "") + (counter ? "_total" : "");
        var labels = Labels(tags);
        lock (_gate)
        {
            if (!_families.TryGetValue(name, out var family))
            {
                var buckets = (instrument as Histogram<double>)?.Advice?.HistogramBucketBoundaries;
                _families[name] = family = new Family(instrument.Description ?? "", counter ? "counter" : buckets is null ? "gauge" : "histogram", buckets);
            }

            family.Take(labels, value, adds: instrument is Counter<long>);
        }
    }

    private static string Labels(ReadOnlySpan<KeyValuePair<string, object?>> tags)
    {
        var text = new StringBuilder();
        foreach (var (key, value) in tags)
        {
            var escaped = Convert.ToString(value, CultureInfo.InvariantCulture)!.Replace("\\", "\\\\").Replace("\"", "\\\"").Replace("\n", "\\n");
            text.Append(text.Length == 0 ? "" : ",").Append(key).Append("=\"").Append(escaped).Append('"');
        }

        return text.ToString();
    }

    private sealed class Family(string about, string type, IReadOnlyList<double>? bounds)
    {
        private readonly SortedDictionary<string, double> _values = new(StringComparer.Ordinal);
        private readonly long[] _counts = new long[(bounds?.Count ?? 0) + 1];
        private double _sum;

        public void Take(string labels, double value, bool adds)
        {
            if (bounds is null)
            {
                _values[labels] = adds ? _values.GetValueOrDefault(labels) + value : value;
                return;
            }

            var bucket = 0;
            while (bucket < bounds.Count && value > bounds[bucket])
            {
                bucket++;
            }

            _counts[bucket]++;
            _sum += value;
        }

        public void Write(StringBuilder text, string name)
        {
            text.Append(CultureInfo.InvariantCulture, $"# HELP {name} {about}\n# TYPE {name} {type}\n");
            foreach (var (labels, value) in _values)
            {
                text.Append(name).Append(labels.Length == 0 ? "" : $"{{{labels}}}").Append(CultureInfo.InvariantCulture, $" {value}\n");
            }

            if (bounds is not null)
            {
                var below = 0L;
                for (var bucket = 0; bucket < _counts.Length; bucket++)
                {
                    below += _counts[bucket];
                    var bound = bucket < bounds.Count ? bounds[bucket].ToString(CultureInfo.InvariantCulture) : "+Inf";
                    text.Append(CultureInfo.InvariantCulture, $"{name}_bucket{{le=\"{bound}\"}} {below}\n");
                }

                text.Append(CultureInfo.InvariantCulture, $"{name}_sum {_sum}\n{name}_count {below}\n");
            }
        }
    }
}
