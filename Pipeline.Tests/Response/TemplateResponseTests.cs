using MathNet.Numerics.Distributions;
using Pipeline.Apparatus;
using Pipeline.Reduction;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Response;

/// <summary>The physics of a measured pulse: molecules that are followed one by one leave in a pulse with two humps, are seen as a density
/// 5 mm on, and arrive one metre on.</summary>
public class TemplateResponseTests
{
    const double Near = 5e-3, Speed = 140, Spread = 14, Step = 4e-5, Noise = 20;
    const int Seen = 400_000, Arriving = 20_000, Bins = 40;

    [Fact]
    public void Fold_TwoHumps_GivesTheArrivalsThatAnExponentialDoesNot()
    {
        var random = new Random(20261124);
        TemplateEmission template = Record(random).ToEmission(0) with { Weighting = TemplateWeighting.Density, Distance = new(Near), MeanSpeed = new(Speed), SpeedSpread = new(Spread) };
        // 0.6 x 1 ms + 0.4 x 4 ms = 2.2 ms; errors: the noise as stated, and the rms of the pulse over the molecules seen
        Assert.Equal(2.2e-3, template.MeanTime, 4 * double.Hypot(template.Delay.Sigma, 1.6e-3 / Math.Sqrt(Seen)));
        var axis = new SignalAxis(4e-3, 2.5e-4, [.. Enumerable.Range(0, Bins + 1)]);
        double[] counts = Arrivals(random, axis);
        Assert.InRange(PValue(counts, Folded(template, axis)), 0.001, 1);
        Assert.InRange(PValue(counts, Folded(new ExponentialEmission { Tail = new(template.MeanTime) }, axis)), 0, 1e-12);
        // seen as crossings, with the distance forgotten, the pulse comes 36 us late, which 20,000 molecules of 1.9 ms width show
        TemplateEmission late = template with { Distance = new(0) };
        Assert.InRange(ChiSquare(counts, Folded(late, axis)) - ChiSquare(counts, Folded(template, axis)), 1, 1000);
    }

    /// <summary>Humps as raised cosines: 0.6 of the molecules within 0.5 ms of 1 ms, the others within 1.2 ms of 4 ms.</summary>
    static double Emission(Random random)
    {
        (double centre, double half) = random.NextDouble() < 0.6 ? (1e-3, 5e-4) : (4e-3, 1.2e-3);
        while (true)
        {
            double u = 2 * random.NextDouble() - 1;
            if (2 * random.NextDouble() < 1 + Math.Cos(Math.PI * u)) return centre + half * u;
        }
    }

    /// <summary>Density against time at the near plane: each molecule counts for as long as it stays, 1/v; with a baseline and noise.</summary>
    static PulseRecord Record(Random random)
    {
        const int Before = 50, Samples = 200;
        var signal = new double[Samples];
        for (int k = 0; k < Seen; k++)
        {
            double v = Normal.Sample(random, Speed, Spread), time = Emission(random) + Near / v;
            signal[Before + (int)Math.Round(time / Step)] += Speed / v;
        }
        return new PulseRecord("pulse.csv", [.. signal.Select((_, i) => (i - Before) * Step)], [.. signal.Select(s => s + 300 + Normal.Sample(random, 0, Noise))]);
    }

    static double[] Arrivals(Random random, SignalAxis axis)
    {
        var counts = new double[Bins];
        for (int k = 0; k < Arriving; k++)
        {
            double time = Emission(random) + 1 / Normal.Sample(random, Speed, Spread);
            int bin = (int)Math.Floor((time - axis.OriginSeconds) / axis.TickSeconds);
            if (bin >= 0 && bin < Bins) counts[bin]++;
        }
        return counts;
    }

    static double[] Folded(EmissionProfile emission, SignalAxis axis)
    {
        var grid = new VelocityGrid(60, 220, 1);
        double[] molecules = [.. Enumerable.Range(0, grid.Cells).Select(c => Arriving * (Normal.CDF(Speed, Spread, grid.Edge(c + 1)) - Normal.CDF(Speed, Spread, grid.Edge(c))))];
        return new ArrivalResponse().Build(TestSetups.OneMetre(emission, 1e9, 1), "off", axis, grid).Fold(molecules);
    }

    /// <summary>Over bins in which five or more are expected (common practice, no source).</summary>
    static double ChiSquare(double[] counts, double[] expected) => counts.Zip(expected, (n, m) => m >= 5 ? (n - m) * (n - m) / m : 0).Sum();

    static double PValue(double[] counts, double[] expected) => 1 - ChiSquared.CDF(expected.Count(m => m >= 5), ChiSquare(counts, expected));
}
