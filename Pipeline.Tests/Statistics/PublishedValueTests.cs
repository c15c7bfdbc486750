using Pipeline.Statistics;

namespace Pipeline.Tests.Statistics;

public class PublishedValueTests
{
    /// <remarks>The fifteen p-values of Benjamini and Hochberg, J. R. Stat. Soc. B 57, 289 (1995), section 3.2; adjusted after Holm (1979),
    /// recomputed by this team.</remarks>
    [Fact]
    public void Holm_PublishedPValues_Match()
    {
        double[] p = [.0001, .0004, .0019, .0095, .0201, .0278, .0298, .0344, .0459, .3240, .4262, .5719, .6528, .7590, 1];
        double[] expected = [.0015, .0056, .0247, .114, .2211, .278, .278, .278, .3213, 1, 1, 1, 1, 1, 1];
        double[] adjusted = MultipleComparisons.Holm(p);
        for (int k = 0; k < p.Length; k++) Assert.Equal(expected[k], adjusted[k], 10);
        Assert.Equal(adjusted.Reverse(), MultipleComparisons.Holm([.. p.Reverse()]));
    }

    [Theory]
    [InlineData(double.NaN)]
    [InlineData(-1e-9)]
    [InlineData(1.0000001)]
    public void Holm_NoPValue_IsRefused(double bad) =>
        Assert.Throws<ArgumentOutOfRangeException>(() => MultipleComparisons.Holm([0.5, bad, 1e-9]));

    [Fact]
    public void Holm_EndsOfTheRange_AreTaken() => Assert.Equal([0.0, 1, 1], MultipleComparisons.Holm([0, 1, 0.5]));

    /// <remarks>JCGM 100:2008 (GUM), example H.1, in nm: 25 (18 degrees of freedom), 9.7 (25.6), 2.9 (50), 50 000 623 x 11.5e-6 x 0.029 (2);
    /// 16.656 recomputed by this team, printed as 16. The combined uncertainty, printed as 32, is 31.7106.</remarks>
    [Fact]
    public void EffectiveFreedom_GaugeBlockOfTheGum_Matches()
    {
        const double Length = 50_000_623, Expansion = Length * 0.1 * 0.58e-6, Temperature = Length * 11.5e-6 * 0.029;
        (double, double)[] parts = [(25 * 25, 18), (9.7 * 9.7, 25.6), (Expansion * Expansion, 50), (Temperature * Temperature, 2)];
        // half a unit of the last digit that stands in the source
        Assert.Equal(31.7106, Math.Sqrt(parts.Sum(p => p.Item1)), 5e-5);
        Assert.Equal(16.656, WelchSatterthwaite.EffectiveFreedom(parts), 5e-4);
    }

    [Fact]
    public void EffectiveFreedom_Limits_AreRight()
    {
        Assert.Equal(7, WelchSatterthwaite.EffectiveFreedom((3, 7)), 12);
        Assert.Equal(20, WelchSatterthwaite.EffectiveFreedom((2, 10), (2, 10)), 12);
        Assert.Equal(40, WelchSatterthwaite.EffectiveFreedom((2, 10), (2, double.PositiveInfinity)), 12);
        Assert.Equal(double.PositiveInfinity, WelchSatterthwaite.EffectiveFreedom((2, double.PositiveInfinity)));
        // one block of shots: no scatter seen, no freedom to see it with
        Assert.Equal(double.PositiveInfinity, WelchSatterthwaite.EffectiveFreedom((0, 0), (2, double.PositiveInfinity)));
    }

    [Theory]
    [InlineData(-1, 5)]
    [InlineData(double.NaN, 5)]
    [InlineData(1, -1)]
    [InlineData(1, double.NaN)]
    public void EffectiveFreedom_BadInput_IsRefused(double variance, double freedom) =>
        Assert.Throws<ArgumentOutOfRangeException>(() => WelchSatterthwaite.EffectiveFreedom((1, 3), (variance, freedom)));

    /// <remarks>x ~ Poisson(s + b), y ~ Poisson(tau b): intervals of Rolke, Lopez, Conrad (2005), recomputed by this team for (10, 15, 5):
    /// 68.27 % 4.040 to 10.579, 90 % 2.416 to 13.248. Here the background is normal with the same mean and error, sqrt(15)/5: that differs
    /// from the Poisson one by its skewness, a few hundredths of a count.</remarks>
    [Theory]
    [InlineData(0.6827, 4.040, 10.579)]
    [InlineData(0.90, 2.416, 13.248)]
    public void SignalInterval_OnAndOff_AgreesWithProfileLikelihood(double confidence, double low, double high)
    {
        var interval = SignalInterval.Profile(10, 3, Math.Sqrt(15) / 5, confidence);
        Assert.Equal(low, interval.Low, 0.1);
        Assert.Equal(high, interval.High, 0.1);
    }

    [Fact]
    public void SignalInterval_KnownBackground_CoversAtLeastItsConfidence()
    {
        // exact sum over counts: no sampling error. Profile likelihood is allowed to fall a little short where counts are few
        foreach (double signal in (double[])[0, 1, 5, 40])
        {
            double covered = 0, chance = Math.Exp(-(signal + 3));
            for (int n = 0; n < 200; n++, chance *= (signal + 3) / n)
                if (SignalInterval.Profile(n, 3, 0, 0.9).Contains(signal)) covered += chance;
            Assert.InRange(covered, 0.86, 1);
        }
    }
}
