using Pipeline.Apparatus;
using Pipeline.Predictions;
using Pipeline.Reduction;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Response;

/// <summary>A coupling capacitor: y = s - s * exp(-t/T)/T (methods of electronics, common practice, no source).</summary>
public class CouplingTests
{
    static readonly RecordShape Record = new() { Shots = 1, Samples = 200_000, OriginSeconds = -1e-3, TickSeconds = 5e-6, Kind = DetectorKind.Analog };

    [Fact]
    public void Apply_ShortPulse_IsFollowedByAnUndershootOfTheSameArea()
    {
        SignalAxis axis = AxisDesign.For(Record, 0.01, 20e-6);
        var signal = new double[axis.Bins];
        int at = Enumerable.Range(0, axis.Bins).First(i => axis.EdgeSeconds(i) > 5e-3);
        signal[at] = 100;
        Coupling.Apply(signal, axis, 20e-3);
        // one bin of width w keeps T/w (1 - e^(-w/T)) of its charge
        double w = axis.WidthSeconds(at);
        Assert.Equal(100 * 20e-3 / w * (1 - Math.Exp(-w / 20e-3)), signal[at], 9);
        Assert.All(signal[(at + 1)..], s => Assert.True(s < 0));
        // 50 time constants later nothing is left of the pulse
        Assert.Equal(0, signal.Sum(), 9);
        // the undershoot falls by e in T
        int late = Enumerable.Range(0, axis.Bins).Last(i => axis.EdgeSeconds(i) < axis.EdgeSeconds(at + 1) + 20e-3);
        double Density(int i) => signal[i] / axis.WidthSeconds(i);
        Assert.Equal(Math.Exp(-(axis.CentreSeconds(late) - axis.CentreSeconds(at + 1)) / 20e-3), Density(late) / Density(at + 1), 4);
    }

    /// <summary>In bins of any width the result is that of a fine sum.</summary>
    [Fact]
    public void Apply_SmoothPulse_IsTheFineConvolution()
    {
        const double T = 8e-3;
        static double Pulse(double t) => Math.Exp(-0.5 * Math.Pow((t - 12e-3) / 2e-3, 2));
        SignalAxis axis = AxisDesign.For(Record with { Samples = 20_000 }, 0.01, 20e-6);
        double[] signal = [.. Enumerable.Range(0, axis.Bins).Select(i => Mean(axis, i, Pulse) * axis.WidthSeconds(i))];
        Coupling.Apply(signal, axis, T);
        foreach (double t in (double[])[9e-3, 13e-3, 20e-3, 60e-3])
        {
            int bin = Enumerable.Range(0, axis.Bins).First(i => axis.EdgeSeconds(i + 1) > t);
            double expected = Mean(axis, bin, time => Pulse(time) - Enumerable.Range(0, 8000).Sum(k => 10e-6 * Pulse(time - 10e-6 * (k + 0.5)) * Math.Exp(-10e-6 * (k + 0.5) / T) / T));
            Assert.Equal(expected, signal[bin] / axis.WidthSeconds(bin), 1e-4);
        }
    }

    static double Mean(SignalAxis axis, int bin, Func<double, double> of) =>
        Enumerable.Range(0, 20).Average(k => of(axis.EdgeSeconds(bin) + (k + 0.5) / 20 * axis.WidthSeconds(bin)));

    /// <summary>Response and prediction go through the same capacitor.</summary>
    [Fact]
    public void Fold_CoupledDetector_IsResponseTimesMolecules()
    {
        Setup setup = TestSetups.OneMetre(new InstantEmission(), 1, null);
        setup = setup with { Detector = new Detector { Kind = DetectorKind.Analog, Efficiency = new(1), VoltSecondPerElectron = new(1e-7), CouplingTime = new(10e-3) } };
        SignalAxis axis = AxisDesign.For(Record with { Samples = 10_000 }, 0.01, 20e-6);
        var grid = new VelocityGrid(80, 120, 1);
        double[] molecules = [.. Enumerable.Range(0, grid.Cells).Select(c => Math.Exp(-0.5 * Math.Pow((grid.Centre(c) - 100) / 6, 2)))];
        double[] folded = new ArrivalResponse().Build(setup, "off", axis, grid).Fold(molecules);
        const int Each = 400;
        var speeds = Enumerable.Range(0, grid.Cells).SelectMany(c => Enumerable.Range(0, Each).Select(k => (Speed: grid.Edge(c) + grid.Step * (k + 0.5) / Each, Weight: molecules[c] / Each))).ToArray();
        double[] zero = new double[speeds.Length];
        var list = new MoleculeList(zero, zero, [.. speeds.Select(s => s.Speed)], zero, zero, zero, zero, [.. speeds.Select(s => s.Weight)], MoleculeWeighting.Crossings);
        double[] direct = new PredictionFold(list, axis, grid).Fold(setup).Signal;
        double peak = folded.Max();
        Assert.True(folded.Min() < -0.001 * peak);
        for (int i = 0; i < axis.Bins; i++) Assert.Equal(folded[i] / peak, direct[i] / peak, 0.01);
    }
}
