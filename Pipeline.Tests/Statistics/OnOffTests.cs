using Pipeline.Quantities;
using Pipeline.Statistics;

namespace Pipeline.Tests.Statistics;

public class OnOffTests
{
    /// <summary>68.27 %, with the digits that six decimals of a limit need.</summary>
    const double OneSigma = 0.682689492137086;

    /// <remarks>Inputs (4, 5), (50, 55), (67, 15), (200, 10), (498426, 493434), (2119449, 23650096): table 1 of Cousins, Linnemann, Tucker,
    /// Nucl. Instrum. Methods A 595, 480 (2008), from memory; values of Li and Ma (1983), equation 17, and of the binomial p-value recomputed
    /// by this team with seven digits.</remarks>
    [Theory]
    [InlineData(150, 100, 1, 3.172973, 3.1080439)]
    [InlineData(4, 5, 0.2, 1.947301, 1.664348)]
    [InlineData(20, 35, 0.2, 3.511395, 3.393319)]
    [InlineData(50, 55, 0.5, 3.023188, 2.933236)]
    [InlineData(67, 15, 2, 3.042869, 2.894274)]
    [InlineData(200, 10, 10, 2.382323, 2.200885)]
    [InlineData(120, 160, 0.5, 3.314701, 3.259492)]
    [InlineData(498426, 493434, 1, 5.012453, 5.011448)]
    [InlineData(2119449, 23650096, 1 / 11.21, 6.404751, 6.404493)]
    [InlineData(10, 0, 0.5, 4.687456, 4.145751)]
    public void Significance_KnownCounts_Matches(int on, int off, double alpha, double liMa, double exact)
    {
        Assert.Equal(liMa, OnOff.LiMa(on, off, alpha), 6);
        Assert.Equal(exact, OnOff.Exact(on, off, alpha).Significance, 6);
    }

    /// <remarks>Printed in the tutorial of a general statistics library.</remarks>
    [Fact]
    public void Exact_PublishedExample_Matches()
    {
        OnOff found = OnOff.Exact(150, 100, 1);
        Assert.Equal(0.0009416504675382, found.Chance, 1e-15);
        Assert.Equal(3.108043895747, found.Significance, 11);
    }

    [Fact]
    public void Significance_SignAndLimits_AreRight()
    {
        Assert.Equal(-OnOff.LiMa(150, 100, 1), OnOff.LiMa(100, 150, 1), 12);
        Assert.Equal(0, OnOff.LiMa(0, 0, 0.3));
        Assert.Equal(0, OnOff.LiMa(10, 20, 0.5), 7);
        Assert.Equal(new OnOff(1, double.NegativeInfinity), OnOff.Exact(0, 7, 0.3));
        Assert.True(OnOff.Exact(1, 900, 0.5).Significance < -10);
        // sum of the binomial by hand: 3 of 3 at one third
        Assert.Equal(1.0 / 27, OnOff.Exact(3, 0, 0.5).Chance, 15);
    }

    [Theory]
    [InlineData(-1, 1, 1)]
    [InlineData(1, -1, 1)]
    [InlineData(1, 1, 0)]
    [InlineData(1, 1, double.NaN)]
    public void Significance_BadInput_IsRefused(int on, int off, double alpha)
    {
        Assert.Throws<ArgumentOutOfRangeException>(() => OnOff.LiMa(on, off, alpha));
        Assert.Throws<ArgumentOutOfRangeException>(() => OnOff.Exact(on, off, alpha));
    }

    /// <remarks>x ~ Poisson(s + b), y ~ Poisson(tau b): Rolke, Lopez, Conrad, Nucl. Instrum. Methods A 551, 493 (2005); recomputed by this
    /// team with six decimals.</remarks>
    [Theory]
    [InlineData(10, 15, 5, OneSigma, 4.040331, 10.578731)]
    [InlineData(10, 15, 5, 0.90, 2.416035, 13.247919)]
    [InlineData(10, 15, 5, 0.95, 1.691181, 14.660853)]
    [InlineData(5, 10, 5, 0.90, 0, 7.719998)]
    [InlineData(3, 15, 5, 0.90, 0, 3.968898)]
    [InlineData(150, 100, 1, OneSigma, 34.239823, 65.893052)]
    public void ProfileInterval_CountedBackground_Matches(double on, double off, double tau, double confidence, double low, double high)
    {
        Interval interval = SignalInterval.OnOff(on, off, tau, confidence);
        Assert.Equal(low, interval.Low, 5e-6);
        Assert.Equal(high, interval.High, 5e-6);
    }

    [Fact]
    public void ProfileInterval_MuchBackgroundCounted_BecomesThatOfAKnownOne()
    {
        Interval counted = SignalInterval.OnOff(10, 3e12, 1e12, 0.9), known = SignalInterval.Profile(10, 3, 0, 0.9);
        // the background is known to 2e-6
        Assert.Equal(known.Low, counted.Low, 1e-5);
        Assert.Equal(known.High, counted.High, 1e-5);
        // nothing counted anywhere: -2 ln L is 2 s
        Assert.Equal(0.5 * 2.705543454095404, SignalInterval.OnOff(0, 0, 3, 0.9).High, 9);
    }

    [Theory]
    [InlineData(-1, 1, 1, 0.9)]
    [InlineData(1, -1, 1, 0.9)]
    [InlineData(1, 1, 0, 0.9)]
    [InlineData(1, 1, double.NaN, 0.9)]
    [InlineData(1, 1, 1, 1.1)]
    public void ProfileInterval_BadInput_IsRefused(double on, double off, double tau, double confidence) =>
        Assert.ThrowsAny<ArgumentException>(() => SignalInterval.OnOff(on, off, tau, confidence));
}
