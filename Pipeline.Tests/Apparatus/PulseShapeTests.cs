using MathNet.Numerics.Integration;
using Pipeline.Apparatus;

namespace Pipeline.Tests.Apparatus;

public class PulseShapeTests
{
    static readonly double[] Times = [0, 1, 1.5, 4, 4.2, 9], Signal = [0.5, 3, -0.1, 2, 1, 0];

    /// <summary>By hand: areas 1.75, 0.725, 2.375, 0.3, 2.4, in all 7.55.</summary>
    [Fact]
    public void ShareBefore_Samples_IsTheArea()
    {
        PulseShape shape = PulseShape.OfSamples(Times, Signal);
        Assert.Equal([0, 1.75 / 7.55, 2.475 / 7.55, 4.85 / 7.55, 5.15 / 7.55, 1], shape.Shares.ToArray().Select(s => Math.Round(s, 14)), (a, b) => Math.Abs(a - b) < 1e-13);
        // halfway through the first piece: (0.5 + 1.75)/2 over half its length
        Assert.Equal(0.5625 / 7.55, shape.ShareBefore(0.5), 1e-14);
        Assert.Equal((0.0, 1.0), (shape.ShareBefore(-1), shape.ShareBefore(10)));
    }

    /// <summary>A cubic is exact in a rule of two points, moments of the density in one of three.</summary>
    [Fact]
    public void Integrals_OfPieces_AreExact()
    {
        PulseShape shape = PulseShape.OfSamples(Times, Signal);
        double sum = 0, mean = 0, square = 0;
        for (int i = 0; i + 1 < Times.Length; i++)
        {
            double middle = 0.5 * (Times[i] + Times[i + 1]);
            double Density(double t) => (Signal[i] + (Signal[i + 1] - Signal[i]) * (t - Times[i]) / (Times[i + 1] - Times[i])) / 7.55;
            Assert.Equal(sum + GaussLegendreRule.Integrate(shape.ShareBefore, Times[i], middle, 3), shape.IntegralBefore(middle), 1e-14);
            sum += GaussLegendreRule.Integrate(shape.ShareBefore, Times[i], Times[i + 1], 3);
            mean += GaussLegendreRule.Integrate(t => t * Density(t), Times[i], Times[i + 1], 4);
            square += GaussLegendreRule.Integrate(t => t * t * Density(t), Times[i], Times[i + 1], 4);
        }
        Assert.Equal(mean, shape.Mean, 1e-13);
        Assert.Equal(square - mean * mean, shape.Variance(), 1e-12);
        Assert.Equal(11 - mean, shape.IntegralBefore(11), 1e-13);
    }

    /// <summary>Against the convolution itself, for filters from a thousandth of a piece to a million times the pulse.</summary>
    [Theory]
    [InlineData(1e-3)]
    [InlineData(0.3)]
    [InlineData(20)]
    [InlineData(1e7)]
    public void Filtered_Samples_IsTheConvolution(double timeConstant)
    {
        PulseShape shape = PulseShape.OfSamples(Times, Signal);
        var filtered = new FilteredPulse(shape, timeConstant, "template");
        foreach (double t in new[] { 0.4, 1.2, 2.5, 4.05, 7, 9, 12 })
        {
            double[] ends = [.. Times.Where(x => x < t), .. new[] { 1, 3, 10, 30 }.Select(n => t - n * timeConstant).Where(x => x > 0), t];
            ends = [.. ends.Order()];
            double sum = 0;
            for (int i = 0; i + 1 < ends.Length; i++)
                sum += GaussLegendreRule.Integrate(x => shape.ShareBefore(x) * Math.Exp((x - t) / timeConstant) / timeConstant, ends[i], ends[i + 1], 32);
            Assert.Equal(1, filtered.CumulativeAt(t) / sum, 1e-9);
            Assert.Equal(shape.IntegralBefore(t) - timeConstant * filtered.CumulativeAt(t), filtered.IntegratedCumulativeAt(t), 1e-12);
        }
        Assert.Equal(shape.Mean + timeConstant, filtered.MeanTime);
    }

    [Fact]
    public void With_MeanAndStretch_MovesAndWidens()
    {
        PulseShape shape = PulseShape.OfSamples(Times, Signal), other = shape.With(20, 1.5);
        Assert.Equal(20, other.Mean, 1e-12);
        Assert.Equal(2.25 * shape.Variance(), other.Variance(), 1e-12);
        Assert.Equal(shape.ShareBefore(2), other.ShareBefore(20 + 1.5 * (2 - shape.Mean)), 1e-13);
        Assert.Equal(1.5 * shape.IntegralBefore(2), other.IntegralBefore(20 + 1.5 * (2 - shape.Mean)), 1e-13);
    }

    /// <summary>Each piece of another pulse holds its share at its mean time; between, the error falls with the cube of the piece.</summary>
    [Fact]
    public void Of_AnotherPulse_KeepsSharesAndIntegrals()
    {
        var pulse = new GaussianEmission { Width = new(1) };
        double[] places = [.. Enumerable.Range(0, 321).Select(k => -8 + 0.05 * k)];
        PulseShape shape = PulseShape.Of(pulse, places);
        foreach (double t in places)
        {
            Assert.Equal(pulse.CumulativeAt(t), shape.ShareBefore(t), 1e-12);
            Assert.Equal(pulse.IntegratedCumulativeAt(t), shape.IntegralBefore(t), 1e-12);
        }
        // third derivative of the share, 0.4, times h^3 by at most 1/(72 sqrt 3)
        for (double t = -7.99; t < 8; t += 0.013) Assert.Equal(pulse.CumulativeAt(t), shape.ShareBefore(t), 0.4 * Math.Pow(0.05, 3) / 72);
    }
}
