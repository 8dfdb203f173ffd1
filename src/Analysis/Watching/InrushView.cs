namespace Lampwarden.Analysis.Watching;

/// <summary>The first minute after switch-on: how long the current took to come within 15 % of where it went.</summary>
internal sealed class InrushView
{
    private const int Samples = 60;
    private const double High = 1.15;

    private readonly float[] amps = new float[Samples]; // the largest reading of each second
    private bool judged;

    /// <summary>True once, when the minute is over.</summary>
    public bool Observe(double seconds, double reading)
    {
        if (judged)
        {
            return false;
        }

        if (seconds < Samples)
        {
            var at = (int)Math.Max(0, seconds);
            amps[at] = Math.Max(amps[at], (float)reading);
            return false;
        }

        judged = true;
        return true;
    }

    /// <summary>Seconds until the current stayed within 15 % above its level at the end of the minute; 0 if always.</summary>
    public double SettledSeconds
    {
        get
        {
            var last = amps.AsSpan(Samples - 10).ToArray();
            Array.Sort(last);
            var level = last[last.Length / 2];
            for (var second = Samples - 1; second >= 0; second--)
            {
                if (amps[second] > High * level)
                {
                    return level > 0 ? second + 1 : 0;
                }
            }

            return 0;
        }
    }

    public void Skip() => judged = true;

    public void Transfer(StateStream state)
    {
        state.Fields(amps);
        state.Field(ref judged);
    }
}
