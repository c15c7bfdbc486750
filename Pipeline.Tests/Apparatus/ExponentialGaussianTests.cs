using MathNet.Numerics.Integration;
using Pipeline.Apparatus;

namespace Pipeline.Tests.Apparatus;

public class ExponentialGaussianTests
{
    /// <remarks>mu 0, s 1, tau 2; recomputed by this team, digits as printed.</remarks>
    [Theory]
    [InlineData(0, 0.17480941736)]
    [InlineData(1, 0.23761736816)]
    [InlineData(2, 0.194506317414)]
    [InlineData(5, 0.0465070865889)]
    public void DensityAt_KnownTimes_Matches(double t, double expected)
    {
        Assert.Equal(expected, Pulse(1, 2).DensityAt(t), 11);
        Assert.Equal(expected, (Pulse(1, 2) with { Delay = new(0.25) }).DensityAt(t + 0.25), 11);
    }

    /// <remarks>Gauss-Legendre of eight points on panels of a twentieth of the width or tail, whichever rules there: exact to rounding, which
    /// is 1e-16 for each of some thousand panels and, for the second integral, in units of the longer time.</remarks>
    [Theory]
    [InlineData(1, 2)]
    [InlineData(1, 0.13)]
    [InlineData(1, 0.01)]
    [InlineData(0.01, 1)]
    [InlineData(1e-6, 5e-3)]
    public void Integrals_OfTheDensity_Follow(double width, double tail)
    {
        ExponentialGaussianEmission pulse = Pulse(width, tail);
        double at = pulse.Support.Low, sum = 0, twice = 0;
        foreach (double panel in Enumerable.Repeat(width / 20, 320).Concat(Enumerable.Repeat(Math.Max(tail, width) / 20, 700)))
        {
            double to = at + panel;
            sum += GaussLegendreRule.Integrate(pulse.DensityAt, at, to, 8);
            twice += GaussLegendreRule.Integrate(pulse.CumulativeAt, at, to, 8);
            at = to;
            Assert.Equal(sum, pulse.CumulativeAt(at), 1e-12);
            Assert.Equal(twice, pulse.IntegratedCumulativeAt(at), 1e-12 * Math.Max(width, tail));
        }
        Assert.Equal(1, pulse.CumulativeAt(at), 1e-14);
        Assert.Equal(pulse.MeanTime, at - pulse.IntegratedCumulativeAt(at), 1e-13 * Math.Max(width, tail));
    }

    /// <remarks>Rounding: 2e-16 of 1 in the share, and of the longest time in its integral (measured against 120 digits).</remarks>
    [Theory]
    [InlineData(1, 1e-12)]
    [InlineData(1, 1e-6)]
    [InlineData(1, 0.2)]
    [InlineData(1, 2)]
    [InlineData(1e-6, 5e-3)]
    [InlineData(1e-6, 1)]
    [InlineData(1e-6, 1e6)]
    public void Integrals_FarInTheTails_RiseAndStayInRange(double width, double tail)
    {
        ExponentialGaussianEmission pulse = Pulse(width, tail);
        double[] times = [.. Enumerable.Range(-4000, 8001).Select(k => 0.01 * width * k), .. Enumerable.Range(1, 4000).Select(k => 40 * width + 0.2 * tail * k)];
        (double share, double integral) = (0, 0);
        foreach (double t in times)
        {
            (double nextShare, double nextIntegral) = (pulse.CumulativeAt(t), pulse.IntegratedCumulativeAt(t));
            double longest = Math.Max(Math.Max(width, tail), Math.Abs(t));
            Assert.True(pulse.DensityAt(t) >= 0 && double.IsFinite(pulse.DensityAt(t)), $"density at {t}");
            Assert.InRange(nextShare, Math.Max(0, share - 5e-16), 1);
            Assert.True(nextIntegral >= integral - 5e-16 * longest, $"integral at {t}");
            (share, integral) = (nextShare, nextIntegral);
        }
        Assert.Equal(0, pulse.CumulativeAt(times[0]));
        Assert.Equal(1, share, 1e-15);
    }

    /// <summary>The two forms of the density meet where one takes over from the other, at (s/tau - t/s)/sqrt(2) = 5.</summary>
    [Theory]
    [InlineData(1, 2)]
    [InlineData(1, 0.05)]
    [InlineData(1e-6, 5e-3)]
    public void DensityAt_ChangeOfForm_HasNoStep(double width, double tail)
    {
        ExponentialGaussianEmission pulse = Pulse(width, tail);
        double t = width * (width / tail - 5 * Math.Sqrt(2)), nudge = 1e-12 * (Math.Abs(t) + width);
        // over two nudges the logarithm of the density moves by its slope, at most (|t| + s)/s^2 + 1/tau; and rounding of a large exponent
        double move = 2 * nudge * ((Math.Abs(t) + width) / (width * width) + 1 / tail) + 1e-15 * (1 + t * t / (width * width));
        Assert.Equal(1, pulse.DensityAt(t + nudge) / pulse.DensityAt(t - nudge), move);
    }

    /// <summary>A short tail shifts and widens the Gaussian: shares differ by (tau/s)^2/2 times the slope 0.242 of its density.</summary>
    [Fact]
    public void CumulativeAt_ShortTail_IsTheShiftedGaussian()
    {
        var gauss = new GaussianEmission { Width = new(1), Delay = new(1e-4) };
        for (double t = -9; t < 9; t += 0.1) Assert.Equal(gauss.CumulativeAt(t), Pulse(1, 1e-4).CumulativeAt(t), 1.3e-9);
    }

    /// <summary>A long tail after a short rise: 1 - exp(-t/tau) but for (s/tau)^2/2.</summary>
    [Fact]
    public void CumulativeAt_LongTail_IsTheExponential()
    {
        var exponential = new ExponentialEmission { Tail = new(1) };
        for (double t = 0.001; t < 40; t *= 1.1) Assert.Equal(exponential.CumulativeAt(t), Pulse(1e-4, 1).CumulativeAt(t), 5.1e-9);
    }

    static ExponentialGaussianEmission Pulse(double width, double tail) => new() { Width = new(width), Tail = new(tail) };
}
