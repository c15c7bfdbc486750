using Pipeline.Quantities;
using Pipeline.Statistics;

namespace Pipeline.Tests.Statistics;

/// <summary>Unified intervals against Feldman and Cousins, Phys. Rev. D 57, 3873 (1998).</summary>
public class FeldmanCousinsTests
{
    /// <summary>The paper's construction has a grid of step 0.005 and prints two decimals.</summary>
    const double Grid = 0.01;

    /// <remarks>90 %, table IV of the paper, plain construction recomputed by this team with three decimals.</remarks>
    [Theory]
    [InlineData(0, new[] { 0.000, 0, 0, 0, 0, 0 }, new[] { 2.436, 1.936, 1.608, 1.081, 0.953, 0.852 })]
    [InlineData(1, new[] { 0.105, 0, 0, 0, 0, 0 }, new[] { 4.357, 3.857, 3.357, 2.528, 1.877, 1.331 })]
    [InlineData(2, new[] { 0.532, 0.032, 0, 0, 0, 0 }, new[] { 5.910, 5.410, 4.910, 3.910, 3.036, 2.328 })]
    [InlineData(3, new[] { 1.102, 0.602, 0.102, 0, 0, 0 }, new[] { 7.425, 6.925, 6.425, 5.425, 4.425, 3.527 })]
    [InlineData(4, new[] { 1.472, 1.167, 0.745, 0, 0, 0 }, new[] { 8.597, 8.097, 7.597, 6.597, 5.597, 4.597 })]
    [InlineData(5, new[] { 1.839, 1.533, 1.247, 0.433, 0, 0 }, new[] { 9.987, 9.487, 8.987, 7.987, 6.987, 5.987 })]
    [InlineData(6, new[] { 2.207, 1.899, 1.608, 1.081, 0.152, 0 }, new[] { 11.469, 10.969, 10.469, 9.469, 8.469, 7.469 })]
    [InlineData(10, new[] { 5.501, 5.001, 4.501, 3.501, 2.633, 1.940 }, new[] { 16.500, 16.000, 15.500, 14.500, 13.500, 12.500 })]
    public void Of_PlainConstruction_MatchesTheTable(int n, double[] low, double[] high)
    {
        double[] backgrounds = [0, 0.5, 1, 2, 3, 4];
        for (int k = 0; k < backgrounds.Length; k++)
        {
            Interval interval = FeldmanCousins.Of(n, backgrounds[k], 0.9, UpperLimitRule.Plain);
            Assert.Equal(low[k], interval.Low, Grid);
            Assert.Equal(high[k], interval.High, Grid);
        }
    }

    /// <remarks>Upper limits of the paper's table IV where its rule against rising limits acts; values from memory.</remarks>
    [Theory]
    [InlineData(0, 2, 1.26)]
    [InlineData(0, 3, 1.08)]
    [InlineData(0, 4, 1.01)]
    [InlineData(1, 4, 1.39)]
    public void Of_FewerCountsThanBackground_HasThePrintedUpperLimit(int n, double background, double printed)
    {
        Assert.Equal(printed, FeldmanCousins.Of(n, background, 0.9).High, Grid);
        Assert.True(FeldmanCousins.Of(n, background, 0.9, UpperLimitRule.Plain).High < printed - 2 * Grid);
    }

    /// <remarks>68.27 % and 95 % without background, tables II and VI of the paper, recomputed by this team.</remarks>
    [Theory]
    [InlineData(0.6827, new[] { 0, 0.368, 0.736, 1.104, 2.336 }, new[] { 1.290, 2.751, 4.250, 5.301, 6.776 })]
    [InlineData(0.95, new[] { 0, 0.051, 0.355, 0.818 }, new[] { 3.093, 5.143, 6.721, 8.252 })]
    public void Of_OtherConfidences_Match(double confidence, double[] low, double[] high)
    {
        for (int n = 0; n < low.Length; n++)
        {
            Interval interval = FeldmanCousins.Of(n, 0, confidence);
            Assert.Equal(low[n], interval.Low, Grid);
            Assert.Equal(high[n], interval.High, Grid);
        }
    }

    /// <summary>The definition, summed over counts without rounding a grid: means just inside a limit accept the count, just outside do not.</summary>
    [Theory]
    [InlineData(3, 0.5, 0.9)]
    [InlineData(10, 3, 0.95)]
    [InlineData(2, 6.3, 0.6827)]
    [InlineData(150, 120.5, 0.9)]
    [InlineData(300, 20, 0.99)]
    public void Of_EndsOfTheInterval_AreTheEdgesOfAcceptance(int n, double background, double confidence)
    {
        Interval interval = FeldmanCousins.Of(n, background, confidence, UpperLimitRule.Plain);
        Assert.True(Accepts(n, interval.High - 1e-4, background, confidence) && !Accepts(n, interval.High + 1e-4, background, confidence));
        if (interval.Low == 0) return;
        Assert.True(Accepts(n, interval.Low + 1e-4, background, confidence) && !Accepts(n, interval.Low - 1e-4, background, confidence));
    }

    /// <summary>Exact sums over counts: no sampling error. Discrete counts cover more than asked for, never less.</summary>
    [Fact]
    public void Of_AnySignal_CoversAtLeastItsConfidence()
    {
        foreach (UpperLimitRule rule in Enum.GetValues<UpperLimitRule>())
        {
            Interval[] intervals = [.. Enumerable.Range(0, 80).Select(n => FeldmanCousins.Of(n, 3.2, 0.9, rule))];
            for (double signal = 0.05; signal < 20; signal += 0.35)
                Assert.InRange(intervals.Select((i, n) => i.Contains(signal) ? Chance(n, signal + 3.2) : 0).Sum(), 0.9 - 1e-9, 1);
        }
    }

    [Fact]
    public void Of_LessBackground_NeverGivesAWeakerLimit()
    {
        double[] plain = Limits(UpperLimitRule.Plain), rule = Limits(UpperLimitRule.NeverRising);
        for (int k = 1; k < rule.Length; k++) Assert.True(rule[k] <= rule[k - 1] + 1e-9);
        // the largest over all larger backgrounds of a fine list, which may miss a peak by as much as the limit falls in one step
        for (int k = 0; k < rule.Length - 200; k++) Assert.InRange(rule[k] - plain[k..].Max(), -1e-9, 0.0101);
        Assert.Contains(Enumerable.Range(1, plain.Length - 1), k => plain[k] > plain[k - 1] + 0.05);
        static double[] Limits(UpperLimitRule rule) => [.. Enumerable.Range(0, 1000).Select(k => FeldmanCousins.Of(1, 0.01 * k, 0.9, rule).High)];
    }

    [Theory]
    [InlineData(-1, 1, 0.9)]
    [InlineData(1, -1e-9, 0.9)]
    [InlineData(1, double.NaN, 0.9)]
    [InlineData(1, 1, 0.4999)]
    [InlineData(1, 1, 1)]
    [InlineData(1, 1, double.NaN)]
    public void Of_BadInput_IsRefused(int n, double background, double confidence) =>
        Assert.Throws<ArgumentOutOfRangeException>(() => FeldmanCousins.Of(n, background, confidence));

    static bool Accepts(int n, double signal, double background, double confidence)
    {
        double Rank(int k) => k * Math.Log((signal + background) / Math.Max(Math.Max(k, background), 1e-300)) + Math.Max(k, background);
        return Enumerable.Range(0, 800).Where(k => Rank(k) > Rank(n)).Sum(k => Chance(k, signal + background)) < confidence;
    }

    static double Chance(int k, double mean) => Math.Exp(k * Math.Log(mean) - mean - MathNet.Numerics.SpecialFunctions.FactorialLn(k));
}
