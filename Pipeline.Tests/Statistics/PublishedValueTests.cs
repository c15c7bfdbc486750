using Pipeline.Statistics;

namespace Pipeline.Tests.Statistics;

public class PublishedValueTests
{
    const double OneSigma = 0.841344746068543, TwoSigma = 0.977249868051821;

    /// <remarks>One-sided limits at 1 and 2 sigma: Gehrels, ApJ 303, 336 (1986), tables 1 and 2; four decimals, recomputed by this team.</remarks>
    [Theory]
    [InlineData(0, 0, 1.8410, 0, 3.7832)]
    [InlineData(1, 0.1728, 3.2995, 0.0230, 5.6827)]
    [InlineData(2, 0.7082, 4.6379, 0.2301, 7.3484)]
    [InlineData(3, 1.3673, 5.9182, 0.5963, 8.9017)]
    [InlineData(5, 2.8403, 8.3825, 1.5829, 11.8206)]
    [InlineData(10, 6.8913, 14.2669, 4.7192, 18.5771)]
    [InlineData(20, 15.5656, 25.5465, 12.0888, 31.1256)]
    [InlineData(100, 90.0167, 111.0334, 81.0159, 122.0825)]
    public void OneSidedLimits_GehrelsTable_Match(int n, double low1, double high1, double low2, double high2)
    {
        Assert.Equal(low1, CountInterval.Lower(n, OneSigma), 4);
        Assert.Equal(high1, CountInterval.Upper(n, OneSigma), 4);
        Assert.Equal(low2, CountInterval.Lower(n, TwoSigma), 4);
        Assert.Equal(high2, CountInterval.Upper(n, TwoSigma), 4);
    }

    /// <remarks>Central 90 % intervals: Garwood, Biometrika 28, 437 (1936); recomputed by this team.</remarks>
    [Theory]
    [InlineData(0, 0, 2.9957)]
    [InlineData(1, 0.0513, 4.7439)]
    [InlineData(3, 0.8177, 7.7537)]
    [InlineData(10, 5.4254, 16.9622)]
    public void Central_Garwood_Matches(int n, double low, double high)
    {
        Assert.Equal(low, CountInterval.Central(n, 0.9).Low, 4);
        Assert.Equal(high, CountInterval.Central(n, 0.9).High, 4);
    }

    [Fact]
    public void Central_BadInput_IsRefused()
    {
        Assert.Throws<ArgumentOutOfRangeException>(() => CountInterval.Central(-1, 0.9));
        Assert.Throws<ArgumentOutOfRangeException>(() => CountInterval.Central(1, 1));
        Assert.Throws<ArgumentOutOfRangeException>(() => CountInterval.Central(1, 0));
    }

    /// <remarks>Chi-square: quantiles at 0.95 and 0.99 from the usual tables (NIST/SEMATECH e-Handbook 1.3.6.7.4), tails recomputed by this
    /// team. The tails check the regularised upper incomplete gamma function of the library.</remarks>
    [Theory]
    [InlineData(3.841459, 1, 0.05, 1e-6)]
    [InlineData(18.307038, 10, 0.05, 1e-6)]
    [InlineData(124.342113, 100, 0.05, 1e-6)]
    [InlineData(6.634897, 1, 0.01, 1e-6)]
    [InlineData(135.806723, 100, 0.01, 1e-6)]
    [InlineData(30, 20, 0.0698536607, 1e-9)]
    [InlineData(1000, 800, 1.64722e-6, 1e-5)]
    public void ChiSquare_Tables_Match(double x, double freedom, double tail, double relative) =>
        Assert.Equal(tail, Tail.ChiSquare(x, freedom), tail * relative);

    /// <remarks>t at 97.5 %: usual tables (NIST/SEMATECH e-Handbook 1.3.6.7.2): 12.706, 2.228, 1.984 for 1, 10, 100 degrees of freedom.</remarks>
    [Theory]
    [InlineData(1, 12.706)]
    [InlineData(10, 2.228)]
    [InlineData(100, 1.984)]
    [InlineData(double.PositiveInfinity, 1.960)]
    public void Student_Tables_Match(double freedom, double quantile)
    {
        Assert.Equal(quantile, Tail.StudentQuantile(0.975, freedom), 3);
        Assert.Equal(0.05, Tail.StudentTwoSided(quantile, freedom), 4);
    }

    [Fact]
    public void NoncentralChiSquare_LimitsAndMean_AreRight()
    {
        Assert.Equal(Tail.ChiSquare(7, 4), Tail.NoncentralChiSquare(7, 4, 0), 14);
        // the mean, nu + lambda, is the area under the tail
        double area = 0;
        for (int k = 0; k < 20_000; k++) area += 0.01 * Tail.NoncentralChiSquare((k + 0.5) * 0.01, 5, 12);
        Assert.Equal(17, area, 3);
    }

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

    /// <remarks>JCGM 100:2008 (GUM), example H.1: components 25 nm (18 degrees of freedom), 9.7 nm (25.6), 2.9 nm (50), 16.675 nm (2:
    /// 50.000623 mm times 11.5e-6 times 0.029) and 31.7106 nm in all give 16.656, printed as 16.</remarks>
    [Fact]
    public void EffectiveFreedom_GaugeBlockOfTheGum_Matches()
    {
        double rest = 31.7106 * 31.7106 - 25.0 * 25 - 9.7 * 9.7 - 2.9 * 2.9 - 16.675 * 16.675;
        double freedom = WelchSatterthwaite.EffectiveFreedom((625, 18), (9.7 * 9.7, 25.6), (2.9 * 2.9, 50), (16.675 * 16.675, 2), (rest, double.PositiveInfinity));
        Assert.Equal(16.656, freedom, 2);
    }

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

    [Theory]
    [InlineData(2)]
    [InlineData(3)]
    [InlineData(10)]
    public void Bootstrap_ResampledMean_HasUnbiasedVariance(int n)
    {
        var random = new MathNet.Numerics.Random.Xoshiro256StarStar(7, threadSafe: false);
        double[] values = [.. Enumerable.Range(0, n).Select(k => (double)(k * k))];
        double mean = values.Average(), variance = values.Sum(v => (v - mean) * (v - mean)) / (n - 1) / n;
        const int Draws = 40_000;
        double sum = 0;
        for (int d = 0; d < Draws; d++)
        {
            double[] w = Bootstrap.Weights(n, random);
            Assert.Equal(n, w.Sum(), 9);
            double resampled = w.Zip(values, (a, b) => a * b).Sum() / n;
            sum += (resampled - mean) * (resampled - mean);
        }
        // relative error of a variance from 40,000 draws: sqrt(2/40,000) = 0.7 %, taken four times, more for heavy tails
        Assert.InRange(sum / Draws / variance, 0.96, 1.04);
    }
}
