using System.Globalization;
using System.Text;
using Lampwarden.Analysis.Lamps;
using Lampwarden.Analysis.Tungsten;
using Lampwarden.Analysis.Units;

namespace Lampwarden.Analysis.Tests.Netlists;

/// <summary>Writes a bench as a netlist; see the README beside this file.</summary>
internal sealed class NetlistWriter(Mains mains, double phaseDegrees)
{
    private const double StepKelvin = 25;

    private readonly StringBuilder text = new();
    private int next;

    public string Write(Bank bank, Unit unit, double seconds, double stepSeconds = 2.5e-5)
    {
        Line($"* {bank.Text} feeding {unit.Text}");
        Line($"Vs s 0 SIN(0 {Math.Sqrt(2) * mains.Volts:R} {mains.Hertz:R} 0 0 {phaseDegrees:R})");
        Line($"Vm s m 0");
        var shorted = unit is ResistorUnit { Ohms: 0 };
        Part(bank.Root, "m", shorted ? "0" : "u");
        if (!shorted)
        {
            UnitElements(unit);
        }

        Line($".options reltol=1e-5 abstol=1e-9 vntol=1e-7 method=trap");
        Line($".tran {stepSeconds:R} {seconds:R} 0 {stepSeconds:R} uic");
        Line($".control");
        Line($"run");
        Line($"wrdata current.txt i(vm)");
        Line($".endc");
        Line($".end");
        return text.ToString();
    }

    private void Part(BankPart part, string from, string to)
    {
        switch (part)
        {
            case LampPart { Lamp.Filament: null } leaf:
                Line($"R{next++} {from} {to} {leaf.Lamp.ColdOhms:R}");
                break;
            case LampPart leaf:
                LampElement(leaf.Lamp.Filament!, from, to);
                break;
            case ParallelPart parallel:
                foreach (var inner in parallel.Parts)
                {
                    Part(inner, from, to);
                }

                break;
            case SeriesPart series:
                var at = from;
                for (var index = 0; index < series.Parts.Count; index++)
                {
                    var end = index == series.Parts.Count - 1 ? to : $"n{next++}";
                    Part(series.Parts[index], at, end);
                    at = end;
                }

                break;
        }
    }

    private void LampElement(Filament filament, string from, string to)
    {
        var id = next++;
        var ohms = Table($"V(t{id})", filament.Ohms);
        Line($"Bl{id} {from} {to} I=V({from},{to})/{ohms}");
        Line($"Ct{id} t{id} 0 1 IC={filament.AmbientKelvin:R}");
        Line($"Bt{id} 0 t{id} I=(V({from},{to})*V({from},{to})/{ohms}-{Table($"V(t{id})", filament.LossWatts)})/{Table($"V(t{id})", filament.HeatJoulesPerKelvin)}");
        Line($"Rt{id} {from} 0 1e8");
    }

    private void UnitElements(Unit unit)
    {
        switch (unit)
        {
            case ResistorUnit resistor:
                Line($"Ru u 0 {resistor.Ohms:R}");
                break;
            case LampUnit lamp:
                LampElement(lamp.Lamp.Filament!, "u", "0");
                break;
            case RectifierUnit rectifier:
                Rectifier(rectifier);
                break;
            case TransformerUnit transformer:
                Transformer(transformer);
                break;
            default:
                throw new NotSupportedException($"No netlist for '{unit.Text}'.");
        }
    }

    // IS and N give 0.8 V at half an ampere.
    private void Rectifier(RectifierUnit unit)
    {
        Line($".model dio D(IS=1e-9 N=1.55 RS=0.01 CJO=10p)");
        Line($"Ri u v {unit.Reservoir.InnerOhms:R}");
        if (unit.Reservoir.FullWave)
        {
            Line($"D1 v p dio");
            Line($"D2 0 p dio");
            Line($"D3 q v dio");
            Line($"D4 q 0 dio");
            Line($"Rq q 0 1e6");
        }
        else
        {
            Line($"D1 v p dio");
            Line($"Rq q 0 1e-6");
        }

        Line($"Cp p q {unit.Reservoir.Farads:R} IC=0");
        Line($"Rl p q {unit.LoadOhms:R}");
    }

    private void Transformer(TransformerUnit unit)
    {
        // Figures as TransformerUnit states them: winding 6 %, core loss 5 %, magnetising current 12 % with its knee, remanence 0.7.
        var rated = unit.VoltAmperes / mains.Volts;
        var peakFlux = Math.Sqrt(2) * mains.Volts / (2 * Math.PI * mains.Hertz);
        var waveRms = Math.Sqrt(0.5 + 2 * 0.35 * 63 / 256 + 0.35 * 0.35 * 48620 / 262144);
        Line($"Rw u e {0.06 * mains.Volts / rated:R}");
        Line($"Rs e 0 {mains.Volts * mains.Volts / (0.05 * unit.VoltAmperes + unit.LoadWatts):R}");
        Line($"Bf 0 f I=V(e)");
        Line($"Cf f 0 1 IC={0.7 * peakFlux:R}");
        Line($"Bx x 0 V=V(f)/{peakFlux:R}");
        Line($"By y 0 V=V(x)*V(x)*V(x)*V(x)*V(x)*V(x)*V(x)*V(x)");
        Line($"Bm e 0 I={0.12 * rated / waveRms:R}*V(x)*(1+0.35*V(y))");
    }

    private static string Table(string variable, Func<double, double> function)
    {
        var pairs = new StringBuilder();
        for (var kelvin = 260.0; kelvin <= 3700; kelvin += StepKelvin)
        {
            pairs.Append(CultureInfo.InvariantCulture, $",{kelvin:R},{function(kelvin):R}");
        }

        return $"pwl({variable}{pairs})";
    }

    private void Line(FormattableString line) => text.Append(line.ToString(CultureInfo.InvariantCulture)).Append('\n');
}
