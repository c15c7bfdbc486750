using MathNet.Numerics.Integration;
using Pipeline.Statistics;

namespace Pipeline.Tests.Statistics;

/// <summary>The arrival signal of a known beam, fitted for number, drift, width and background.</summary>
/// <remarks>v^3 exp(-((v - u)/alpha)^2), flux detector, 1 m, instant emission, 20 bins of 0.5 ms from 3 to 13 ms. Expected results: this
/// team, with two independent general-purpose libraries.</remarks>
public class PoissonFitTests
{
    static readonly double[] Low = [0, 50, 5, 0], High = [1e6, 300, 100, 100], Start = [8000, 120, 45, 5];

    /// <summary>[20] molecules in each bin; the beam is normalised over all speeds.</summary>
    static double[] Shares(double u, double alpha)
    {
        double Flux(double v) => v * v * v * Math.Exp(-(v - u) * (v - u) / (alpha * alpha));
        double Part(double from, double to) => Enumerable.Range(0, 8).Sum(k =>
            GaussLegendreRule.Integrate(Flux, from + (to - from) * k / 8, from + (to - from) * (k + 1) / 8, 12));
        double all = Enumerable.Range(0, 40).Sum(k => Part(20.0 * k, 20.0 * (k + 1)));
        return [.. Enumerable.Range(0, 20).Select(i => Part(1 / (3e-3 + 0.5e-3 * (i + 1)), 1 / (3e-3 + 0.5e-3 * i)) / all)];
    }

    static void Model(ReadOnlySpan<double> x, Span<double> means, Span<double> slopes)
    {
        double[] at = Shares(x[1], x[2]);
        for (int i = 0; i < 20; i++) means[i] = x[0] * at[i] + x[3];
        if (slopes.IsEmpty) return;
        const double Step = 1e-3;
        double[] uUp = Shares(x[1] + Step, x[2]), uDown = Shares(x[1] - Step, x[2]), aUp = Shares(x[1], x[2] + Step), aDown = Shares(x[1], x[2] - Step);
        for (int i = 0; i < 20; i++)
        {
            (slopes[i * 4], slopes[i * 4 + 3]) = (at[i], 1);
            slopes[i * 4 + 1] = x[0] * (uUp[i] - uDown[i]) / (2 * Step);
            slopes[i * 4 + 2] = x[0] * (aUp[i] - aDown[i]) / (2 * Step);
        }
    }

    [Fact]
    public void Find_ExpectedCounts_ReturnsTruthAndItsErrors()
    {
        double[] counts = new double[20];
        Model([1e4, 140, 30, 2], counts, []);
        PoissonFit fit = PoissonFit.Find(Model, counts, Start, Low, High);
        Assert.True(fit.Converged);
        Assert.Equal(1e4, fit.Parameters[0], 1e-2);
        Assert.Equal(140, fit.Parameters[1], 5);
        Assert.Equal(30, fit.Parameters[2], 5);
        Assert.Equal(2, fit.Parameters[3], 5);
        double[] errors = [.. Enumerable.Range(0, 4).Select(k => Math.Sqrt(fit.Covariance![k * 4 + k]))];
        Assert.Equal(100.8955, errors[0], 1e-3);
        Assert.Equal(0.278975, errors[1], 1e-6);
        Assert.Equal(0.253207, errors[2], 1e-6);
        Assert.Equal(0.734970, errors[3], 1e-6);
        Assert.Equal(-0.59242, fit.Covariance![1 * 4 + 2] / (errors[1] * errors[2]), 4);
    }

    [Fact]
    public void Find_WholeCounts_MatchesReference()
    {
        double[] counts = [2, 5, 3, 67, 503, 1416, 2120, 2104, 1596, 1013, 573, 306, 161, 80, 38, 23, 15, 5, 3, 6];
        PoissonFit fit = PoissonFit.Find(Model, counts, Start, Low, High);
        Assert.True(fit.Converged);
        Assert.Equal(9985.527, fit.Parameters[0], 2e-3);
        Assert.Equal(140.0695, fit.Parameters[1], 4);
        Assert.Equal(29.8971, fit.Parameters[2], 4);
        Assert.Equal(2.7606, fit.Parameters[3], 4);
        Assert.Equal(6.60872, fit.Deviance, 4);
    }

    /// <summary>20 + x + x^2 and 20 - x + x^2 against 25 and 25: at zero the gradient vanishes and the expected information is 2, but the sum of
    /// squares falls on both sides, 2 - 4 * 5 &lt; 0; minima are at ±sqrt(4.5).</summary>
    [Theory]
    [InlineData(0, false)]
    [InlineData(2.1213203435596424, true)]
    [InlineData(2, false)]
    public void IsMinimum_StationaryPoint_IsToldByItsCurvature(double at, bool minimum)
    {
        static void Parabolas(ReadOnlySpan<double> x, Span<double> means, Span<double> slopes)
        {
            (means[0], means[1]) = (20 + x[0] + x[0] * x[0], 20 - x[0] + x[0] * x[0]);
            if (!slopes.IsEmpty) (slopes[0], slopes[1]) = (1 + 2 * x[0], -1 + 2 * x[0]);
        }
        var objective = new PoissonObjective(Parabolas, [25, 25], 1, [], [1, 1]);
        var there = new PoissonFit([at], 0, 0, [0.5], Converged: true, [false]);
        Assert.Equal(minimum, there.IsMinimum(objective));
        // a search that begins on the top stays there, and calls it converged
        if (at == 0) Assert.True(PoissonFit.Find(objective, [0], [-10], [10]).Converged);
    }

    /// <summary>Both ways to the minimum end there; what the quick one cannot do, it says.</summary>
    [Fact]
    public void Scoring_FromNearby_EndsWhereTheSearchDoes()
    {
        double[] counts = [2, 5, 3, 67, 503, 1416, 2120, 2104, 1596, 1013, 573, 306, 161, 80, 38, 23, 15, 5, 3, 6];
        double[][] Columns(ReadOnlySpan<double> x, Span<double> means)
        {
            var slopes = new double[80];
            Model(x, means, slopes);
            return [.. Enumerable.Range(0, 4).Select(k => Enumerable.Range(0, 20).Select(i => slopes[i * 4 + k]).ToArray())];
        }
        var scoring = new FisherScoring(Columns, counts, [], null);
        double[] found = scoring.Find([9900, 141, 29, 2.5], Low, High)!, expected = PoissonFit.Find(Model, counts, Start, Low, High).Parameters;
        for (int k = 0; k < 4; k++) Assert.Equal(expected[k], found[k], 1e-6 * expected[k]);
        Assert.Null(scoring.Find([9900, 141, 29, 2.5], Low, [9950, 300, 100, 100]));
        Assert.Null(scoring.Find([1, 299, 5.1, 99], Low, High));
    }

    /// <remarks>Constant fitted to 0 1 3 7 12 9 4 2 0 1: deviance 40.72899027 at the mean 3.9 (Baker and Cousins 1984; value recomputed by
    /// this team).</remarks>
    [Fact]
    public void Deviance_ConstantModel_MatchesReference()
    {
        double[] counts = [0, 1, 3, 7, 12, 9, 4, 2, 0, 1];
        Assert.Equal(40.72899027, counts.Sum(n => PoissonDeviance.Of(n, 3.9)), 8);
        // near the minimum the series takes over from the closed form: both sides agree
        Assert.Equal(PoissonDeviance.Of(1e6, 1e6 * (1 + 1.0001e-4)), PoissonDeviance.Of(1e6, 1e6 * (1 + 0.9999e-4)), 1e-5);
    }

    [Theory]
    [InlineData(0, 2.5)]
    [InlineData(7, 2.5)]
    [InlineData(7, 7.0000001)]
    [InlineData(7, 11)]
    public void Residual_Slope_MatchesFiniteDifference(double count, double mean)
    {
        double h = 1e-5 * mean;
        _ = PoissonDeviance.Residual(count, mean, out double slope);
        double numeric = (PoissonDeviance.Residual(count, mean + h, out _) - PoissonDeviance.Residual(count, mean - h, out _)) / (2 * h);
        Assert.Equal(numeric, slope, 1e-4 * Math.Abs(numeric));
    }
}
