using Pipeline.Statistics;

namespace Pipeline.Tests.Statistics;

public class TailTests
{
    /// <remarks>Quantiles at 0.95 and 0.99: usual tables (NIST/SEMATECH e-Handbook 1.3.6.7.4), recomputed by this team with six decimals; a
    /// unit of the last moves the chance by less than 1e-6 of itself.</remarks>
    [Theory]
    [InlineData(1, 3.841459, 6.634897)]
    [InlineData(2, 5.991465, 9.210340)]
    [InlineData(5, 11.070498, 15.086272)]
    [InlineData(10, 18.307038, 23.209251)]
    [InlineData(20, 31.410433, 37.566235)]
    [InlineData(50, 67.504807, 76.153891)]
    [InlineData(100, 124.342113, 135.806723)]
    public void ChiSquare_TabulatedQuantiles_LeaveFiveAndOnePercent(double freedom, double at95, double at99)
    {
        Assert.Equal(1, Tail.ChiSquare(at95, freedom) / 0.05, 1e-6);
        Assert.Equal(1, Tail.ChiSquare(at99, freedom) / 0.01, 1e-6);
    }

    /// <remarks>First two: recomputed by this team, digits as printed. Others: 40 digits of an arbitrary-precision library, computed for this
    /// test; they hold the library's incomplete gamma to the documented 2e-11 where 1 minus a cumulative would have few digits or none.</remarks>
    [Theory]
    [InlineData(30, 20, 0.0698536607, 1e-9)]
    [InlineData(1000, 800, 1.64722e-6, 5e-6)]
    [InlineData(24, 1, 9.63357008643095e-7, 2e-11)]
    [InlineData(50, 1, 1.53745979442803e-12, 2e-11)]
    [InlineData(60, 10, 3.62430095206149e-9, 2e-11)]
    [InlineData(85, 10, 5.21973387841621e-14, 2e-11)]
    [InlineData(110, 37, 3.5957510224426e-9, 2e-11)]
    [InlineData(90, 20, 7.41291956539309e-11, 2e-11)]
    [InlineData(1200, 1000, 1.22559423306229e-5, 2e-11)]
    [InlineData(1350, 1000, 7.30287705772694e-13, 2e-11)]
    public void ChiSquare_FarTail_Matches(double x, double freedom, double tail, double relative) =>
        Assert.Equal(1, Tail.ChiSquare(x, freedom) / tail, relative);

    [Fact]
    public void ChiSquare_Limits_AreExact()
    {
        Assert.Equal(1, Tail.ChiSquare(0, 3));
        Assert.Equal(1, Tail.ChiSquare(-1, 3));
        Assert.Equal(0, Tail.ChiSquare(double.PositiveInfinity, 3));
    }

    /// <remarks>Sums of 40 digits by an arbitrary-precision library, computed for this test. The fifth lies so deep that the central tail grows
    /// for hundreds of terms after the weights have begun to fall.</remarks>
    [Theory]
    [InlineData(11.0705, 5, 10, 0.677438744686521)]
    [InlineData(42.557, 28, 15, 0.485225076307913)]
    [InlineData(1, 3, 20, 0.999956870608489)]
    [InlineData(60, 3, 2, 6.76746398812027e-10)]
    [InlineData(2000, 20, 1000, 4.45791201472454e-38)]
    [InlineData(1000, 20, 1000, 0.618088886821457)]
    public void NoncentralChiSquare_HighPrecisionValues_Match(double x, double freedom, double noncentrality, double tail) =>
        Assert.Equal(1, Tail.NoncentralChiSquare(x, freedom, noncentrality) / tail, 1e-10);

    [Fact]
    public void NoncentralChiSquare_LimitsAndMean_AreRight()
    {
        Assert.Equal(Tail.ChiSquare(7, 4), Tail.NoncentralChiSquare(7, 4, 0), 14);
        Assert.Equal(Tail.ChiSquare(7, 4), Tail.NoncentralChiSquare(7, 4, 1e-300), 14);
        // a difference of overwhelming size is seen for sure
        Assert.Equal(1, Tail.NoncentralChiSquare(30, 10, 1e13));
        // the mean, nu + lambda, is the area under the tail; midpoint rule of step h on a smooth tail: h^2/24 times its slope
        double area = 0;
        for (int k = 0; k < 20_000; k++) area += 0.01 * Tail.NoncentralChiSquare((k + 0.5) * 0.01, 5, 12);
        Assert.Equal(17, area, 1e-6);
    }

    /// <remarks>0.317, 0.0455, 0.0027: usual tables; 15 digits by an arbitrary-precision library, computed for this test.</remarks>
    [Theory]
    [InlineData(1, 0.317310507862914)]
    [InlineData(-2, 0.0455002638963584)]
    [InlineData(3, 0.00269979606326019)]
    [InlineData(5, 5.73303143758388e-7)]
    [InlineData(8, 1.24419211485436e-15)]
    public void Normal_Tails_MatchAndInvert(double z, double p)
    {
        Assert.Equal(1, Tail.NormalTwoSided(z) / p, 2e-14);
        // the lower quantile, where p has all its digits: the slope of ln p is about z
        Assert.Equal(-Math.Abs(z), Tail.NormalQuantile(0.5 * p), 1e-13);
    }

    /// <remarks>t at 97.5 %: usual tables (NIST/SEMATECH e-Handbook 1.3.6.7.2), three decimals. t99(16) = 2.920782: JCGM 100:2008 (GUM), example
    /// H.1 and table G.2 (2.92), digits recomputed by this team.</remarks>
    [Theory]
    [InlineData(0.975, 1, 12.706, 5e-4)]
    [InlineData(0.975, 10, 2.228, 5e-4)]
    [InlineData(0.975, 100, 1.984, 5e-4)]
    [InlineData(0.975, double.PositiveInfinity, 1.960, 5e-4)]
    [InlineData(0.995, 16, 2.920782, 5e-7)]
    public void StudentQuantile_Tables_Match(double p, double freedom, double quantile, double halfUnit)
    {
        Assert.Equal(quantile, Tail.StudentQuantile(p, freedom), halfUnit);
        Assert.Equal(-quantile, Tail.StudentQuantile(1 - p, freedom), halfUnit);
    }

    /// <remarks>Closed forms: tan(pi (p - 1/2)) for one degree of freedom, (2p - 1)/sqrt(2p(1 - p)) for two. Rounding of 1 - p: 1e-11 at most.</remarks>
    [Theory]
    [InlineData(0.5)]
    [InlineData(0.6)]
    [InlineData(0.975)]
    [InlineData(0.99999)]
    [InlineData(0.001)]
    public void StudentQuantile_OneAndTwoDegrees_HaveClosedForms(double p)
    {
        double one = Math.Tan(Math.PI * (p - 0.5)), two = (2 * p - 1) / Math.Sqrt(2 * p * (1 - p));
        Assert.Equal(one, Tail.StudentQuantile(p, 1), 1e-10 * Math.Abs(one) + 1e-15);
        Assert.Equal(two, Tail.StudentQuantile(p, 2), 1e-10 * Math.Abs(two) + 1e-15);
    }

    /// <remarks>Incomplete beta functions of 40 digits by an arbitrary-precision library, computed for this test: degrees of freedom that are
    /// not whole. Tolerance as documented.</remarks>
    [Theory]
    [InlineData(3, 0.5, 0.367308155985943)]
    [InlineData(2, 2.7, 0.149423438070502)]
    [InlineData(2.9, 16.656, 0.0101196118689471)]
    [InlineData(6, 100.5, 3.13684486121637e-8)]
    [InlineData(5, 5000, 5.92894745912132e-7)]
    public void Student_RealFreedom_MatchesAndInverts(double t, double freedom, double p)
    {
        Assert.Equal(1, Tail.StudentTwoSided(t, freedom) / p, 1e-11);
        Assert.Equal(-t, Tail.StudentQuantile(0.5 * p, freedom), 1e-9);
    }

    /// <summary>No step where Student's t is handed over to the normal: 2e-8 of the beta function, and the first term of the expansion in
    /// 1/nu, density times (t^3 + t)/(4 nu), where density over tail is below t + 1/t.</summary>
    [Theory]
    [InlineData(2)]
    [InlineData(5)]
    public void Student_AtTheHandOver_IsContinuous(double t) =>
        Assert.Equal(1, Tail.StudentTwoSided(t, 1.0000001e7) / Tail.StudentTwoSided(t, 1e7), 2e-8 + (t * t + 1) * (t * t + 1) / 4e7);

    [Fact]
    public void Tails_NoNumber_IsRefused()
    {
        const double NaN = double.NaN;
        Action[] bad =
        [
            () => Tail.ChiSquare(NaN, 1), () => Tail.ChiSquare(1, NaN), () => Tail.ChiSquare(1, 0), () => Tail.ChiSquare(1, -1),
            () => Tail.NoncentralChiSquare(NaN, 1, 1), () => Tail.NoncentralChiSquare(1, 0, 1), () => Tail.NoncentralChiSquare(1, 1, NaN),
            () => Tail.NoncentralChiSquare(1, 1, -1e-9), () => Tail.NoncentralChiSquare(1, 1, double.PositiveInfinity),
            () => Tail.NormalTwoSided(NaN), () => Tail.NormalQuantile(0), () => Tail.NormalQuantile(1), () => Tail.NormalQuantile(NaN),
            () => Tail.StudentTwoSided(NaN, 1), () => Tail.StudentTwoSided(1, NaN), () => Tail.StudentTwoSided(1, 0),
            () => Tail.StudentTwoSided(NaN, double.PositiveInfinity), () => Tail.StudentQuantile(0, 3), () => Tail.StudentQuantile(1, 3),
            () => Tail.StudentQuantile(NaN, 3), () => Tail.StudentQuantile(0.5, 0), () => Tail.StudentQuantile(0.5, NaN),
        ];
        Assert.All(bad, b => Assert.Throws<ArgumentOutOfRangeException>(b));
    }
}
