using Pipeline.Quantities;
using Pipeline.Statistics;

namespace Pipeline.Tests.Statistics;

public class CountIntervalTests
{
    /// <remarks>One-sided limits at 1, 2, 3 sigma: Gehrels, ApJ 303, 336 (1986), tables 1 and 2; four decimals, recomputed by this team.</remarks>
    [Theory]
    [InlineData(0, 0, 1.8410, 0, 3.7832, 0, 6.6077)]
    [InlineData(1, 0.1728, 3.2995, 0.0230, 5.6827, 0.0014, 8.9003)]
    [InlineData(2, 0.7082, 4.6379, 0.2301, 7.3484, 0.0529, 10.8696)]
    [InlineData(3, 1.3673, 5.9182, 0.5963, 8.9017, 0.2117, 12.6806)]
    [InlineData(5, 2.8403, 8.3825, 1.5829, 11.8206, 0.7919, 16.0349)]
    [InlineData(10, 6.8913, 14.2669, 4.7192, 18.5771, 3.0842, 23.6390)]
    [InlineData(20, 15.5656, 25.5465, 12.0888, 31.1256, 9.1926, 37.4356)]
    [InlineData(100, 90.0167, 111.0334, 81.0159, 122.0825, 72.6462, 133.8295)]
    public void OneSided_GehrelsTable_Match(int n, double low1, double high1, double low2, double high2, double low3, double high3)
    {
        (double Low, double High)[] table = [(low1, high1), (low2, high2), (low3, high3)];
        for (int s = 1; s <= 3; s++)
        {
            Assert.Equal(table[s - 1].Low, CountInterval.LowerOneSided(n, s), 4);
            Assert.Equal(table[s - 1].High, CountInterval.UpperOneSided(n, s), 4);
        }
    }

    /// <remarks>Central 90 % and 95 % intervals: Garwood, Biometrika 28, 437 (1936); four decimals, recomputed by this team.</remarks>
    [Theory]
    [InlineData(0, 0, 2.9957, 0, 3.6889)]
    [InlineData(1, 0.0513, 4.7439, 0.0253, 5.5716)]
    [InlineData(2, 0.3554, 6.2958, 0.2422, 7.2247)]
    [InlineData(3, 0.8177, 7.7537, 0.6187, 8.7673)]
    [InlineData(5, 1.9701, 10.5130, 1.6235, 11.6683)]
    [InlineData(10, 5.4254, 16.9622, 4.7954, 18.3904)]
    [InlineData(20, 13.2547, 29.0620, 12.2165, 30.8884)]
    public void Central_Garwood_Matches(int n, double low90, double high90, double low95, double high95)
    {
        Interval ninety = CountInterval.Central(n, 0.90), more = CountInterval.Central(n, 0.95);
        Assert.Equal((low90, high90, 0.90), (Math.Round(ninety.Low, 4), Math.Round(ninety.High, 4), ninety.Confidence));
        Assert.Equal((low95, high95, 0.95), (Math.Round(more.Low, 4), Math.Round(more.High, 4), more.Confidence));
    }

    /// <remarks>One-sided upper limits at 90, 95, 99 %; recomputed by this team. Those of no counts are -ln(1 - confidence).</remarks>
    [Theory]
    [InlineData(0, 2.3026, 2.9957, 4.6052)]
    [InlineData(1, 3.8897, 4.7439, 6.6384)]
    [InlineData(2, 5.3223, 6.2958, 8.4059)]
    [InlineData(3, 6.6808, 7.7537, 10.0451)]
    public void Upper_FewCounts_Match(int n, double at90, double at95, double at99)
    {
        Assert.Equal(at90, CountInterval.Upper(n, 0.90), 4);
        Assert.Equal(at95, CountInterval.Upper(n, 0.95), 4);
        Assert.Equal(at99, CountInterval.Upper(n, 0.99), 4);
    }

    /// <summary>The definition itself, summed over counts: so few, or so many, have the chance that the limit states.</summary>
    [Theory]
    [InlineData(1, 1)]
    [InlineData(4, 3)]
    [InlineData(30, 5)]
    public void OneSided_Limits_LeaveTheStatedChance(int n, double sigmas)
    {
        double chance = 0.5 * Tail.NormalTwoSided(sigmas);
        // 2e-8 of the chance is the documented error of the quantile
        Assert.Equal(1, AtMost(n, CountInterval.UpperOneSided(n, sigmas)) / chance, 2e-8);
        double atLeast = 0, low = CountInterval.LowerOneSided(n, sigmas);
        for (int k = n; k < n + 200; k++) atLeast += Chance(k, low);
        Assert.Equal(1, atLeast / chance, 2e-8);
    }

    /// <summary>The largest count there is must not overflow; the normal limit with the correction (z^2 + 2)/3 is exact to
    /// 1e-5 counts there, and the library's quantile off by the documented 3e-6 sigma.</summary>
    [Fact]
    public void Upper_LargestCount_IsNearlyNormal()
    {
        const double N = int.MaxValue, Z = 1.6448536269514722;
        Assert.Equal(N + Z * Math.Sqrt(N) + (Z * Z + 2) / 3, CountInterval.Upper(int.MaxValue, 0.95), 3e-6 * Math.Sqrt(N));
    }

    [Theory]
    [InlineData(-1, 0.9)]
    [InlineData(1, 0)]
    [InlineData(1, 1)]
    [InlineData(1, -0.1)]
    [InlineData(1, double.NaN)]
    [InlineData(0, double.NaN)]
    public void Limits_BadInput_IsRefused(int n, double confidence)
    {
        Assert.Throws<ArgumentOutOfRangeException>(() => CountInterval.Central(n, confidence));
        Assert.Throws<ArgumentOutOfRangeException>(() => CountInterval.Upper(n, confidence));
        Assert.Throws<ArgumentOutOfRangeException>(() => CountInterval.Lower(n, confidence));
    }

    [Fact]
    public void OneSided_SigmasOutsideTheirRange_AreRefused()
    {
        Assert.True(CountInterval.UpperOneSided(3, 7) > CountInterval.UpperOneSided(3, 6.9));
        Assert.True(CountInterval.UpperOneSided(3, 0) > CountInterval.LowerOneSided(3, 0));
        foreach (double bad in (double[])[-1e-9, 7.0001, double.NaN])
        {
            Assert.Throws<ArgumentOutOfRangeException>(() => CountInterval.UpperOneSided(3, bad));
            Assert.Throws<ArgumentOutOfRangeException>(() => CountInterval.LowerOneSided(3, bad));
        }
    }

    static double AtMost(int n, double mean) => Enumerable.Range(0, n + 1).Sum(k => Chance(k, mean));

    static double Chance(int k, double mean) => Math.Exp(k * Math.Log(mean) - mean - MathNet.Numerics.SpecialFunctions.GammaLn(k + 1));
}
