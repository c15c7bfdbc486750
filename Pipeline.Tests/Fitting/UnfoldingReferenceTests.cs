using MathNet.Numerics.LinearAlgebra;
using Pipeline.Fitting;
using Pipeline.Statistics;

namespace Pipeline.Tests.Fitting;

/// <summary>The solver of the unfolding on two small problems with known answers, without the smoothing that the program chooses.</summary>
public class UnfoldingReferenceTests
{
    static readonly double[][] Smearing = [[.7, .2, 0, 0], [.2, .6, .2, 0], [.05, .15, .6, .3], [0, 0, .15, .6]];
    static readonly double[] Counts = [60, 95, 110, 40];

    /// <remarks>Expectation-maximisation for Poisson counts (Shepp and Vardi 1982; Richardson 1972, Lucy 1974), iterated here as an
    /// independent way to the same maximum; values of each step, with the deviance of Baker and Cousins, recomputed by this team with ten digits.</remarks>
    [Theory]
    [InlineData(1, new[] { 74.38596491, 89.8245614, 91.57894737, 68.88888889 }, 9.776852745)]
    [InlineData(2, new[] { 68.68040392, 94.89666648, 100.08864097, 60.57508244 }, 5.672298200)]
    [InlineData(4, new[] { 61.76120572, 99.47352676, 112.27160419, 50.18775574 }, 2.129595510)]
    [InlineData(10, new[] { 57.11480548, 99.34721474, 128.38416056, 38.21792028 }, 0.276817576)]
    [InlineData(100, new[] { 59.41798134, 92.03672415, 139.47288853, 31.79865076 }, null)]
    public void Iterations_FromFlat_ReachThePrintedValues(int steps, double[] expected, double? deviance)
    {
        double[] found = Iterated(steps);
        for (int k = 0; k < 4; k++) Assert.Equal(expected[k], found[k], 1e-8);
        // every step keeps the number of counts
        Assert.Equal(305, Folded(found).Sum(), 9);
        if (deviance is { } printed) Assert.Equal(printed, Folded(found).Select((m, i) => PoissonDeviance.Of(Counts[i], m)).Sum(), 1e-9);
    }

    /// <remarks>Exact inverse, its standard deviations for Poisson counts and first correlation: recomputed by this team.</remarks>
    [Fact]
    public void PenalisedFit_NoPenalty_ReachesTheLimitOfTheIterationsAndItsErrors()
    {
        // a window has five bins or more: the fifth is empty and no cell reaches it
        Design design = LinearProblem.Of([.. Smearing, [0, 0, 0, 0]], [.. Counts, 0], null);
        var fit = new PenalisedFit(design, new double[16]);
        fit.StartFlat();
        fit.Solve();
        Assert.True(fit.Converged);
        double[] inverse = [59.41828255, 92.03601108, 139.47368421, 31.79824561], deviation = [13.69763, 21.96859, 23.62566, 13.45677];
        Matrix<double> covariance = Matrix<double>.Build.DenseOfRowMajor(4, 4, fit.Hessian).Inverse();
        double[] limit = Iterated(2000);
        for (int k = 0; k < 4; k++)
        {
            Assert.Equal(inverse[k], fit.X[k], 1e-8);
            Assert.Equal(limit[k], fit.X[k], 1e-8);
            Assert.Equal(deviation[k], Math.Sqrt(covariance[k, k]), 1e-5);
        }
        Assert.Equal(-0.608153, covariance[0, 1] / (deviation[0] * deviation[1]), 6);
    }

    /// <remarks>Image of a slit after Shaw (SIAM J. Numer. Anal. 9, 97, 1972) in the discrete form that regularisation papers use, 32 cells,
    /// condition number 1e18; the noise is 0.01 cos(17 i). Residual, effective parameters and cell 15 recomputed by this team.</remarks>
    [Fact]
    public void PenalisedFit_ShawProblem_MatchesTikhonov()
    {
        (PenalisedFit fit, double residual, double effective) = Shaw(0.1);
        Assert.All(fit.X, x => Assert.True(x > 0));   // the bound at zero is inactive: plain Tikhonov
        Assert.Equal(0.0685548118, residual, 9);
        Assert.Equal(4.34972621, effective, 7);
        Assert.Equal(0.5452288592, fit.X[15], 1e-6 * 0.55);
    }

    /// <remarks>Strengths by generalised cross-validation and by the discrepancy principle (Morozov 1966), recomputed by this team.</remarks>
    [Fact]
    public void PenalisedFit_ShawProblem_MeetsBothRulesAtTheKnownStrengths()
    {
        const double Least = 0.015083066, Discrepancy = 0.012132652;
        static double CrossValidation(double lambda)
        {
            (_, double residual, double effective) = Shaw(lambda);
            return residual * residual / ((32 - effective) * (32 - effective));
        }
        Assert.Equal(6.58214, Shaw(Least).Effective, 5);
        double at = CrossValidation(Least), below = CrossValidation(Least * 0.99), above = CrossValidation(Least * 1.01);
        Assert.True(at < below && at < above);
        // a parabola through the three points has its minimum within a thousandth of the known strength
        Assert.Equal(0, 0.005 * (below - above) / (below + above - 2 * at), 1e-3);
        Assert.Equal(0.0402210938, Shaw(Discrepancy).Residual, 9);
    }

    static (PenalisedFit Fit, double Residual, double Effective) Shaw(double lambda)
    {
        const int N = 32;
        double[] angle = [.. Enumerable.Range(0, N).Select(i => -Math.PI / 2 + (i + 0.5) * Math.PI / N)];
        double[][] rows = [.. angle.Select(s => angle.Select(t => Kernel(s, t)).ToArray())];
        double[] truth = [.. angle.Select(t => 2 * Math.Exp(-6 * (t - 0.8) * (t - 0.8)) + Math.Exp(-2 * (t + 0.5) * (t + 0.5)))];
        double[] data = [.. rows.Select((r, i) => r.Zip(truth, (a, x) => a * x).Sum() + 0.01 * Math.Cos(17 * i))];
        Design design = LinearProblem.Of(rows, data, [.. data.Select(_ => 1.0)]);
        var fit = new PenalisedFit(design, LinearProblem.Unit(N, lambda * lambda));
        fit.StartFlat();
        fit.Solve();
        double effective = Smoothing.EffectiveParameters(design, fit, out _);
        return (fit, Math.Sqrt(fit.Means.Zip(data, (m, y) => (m - y) * (m - y)).Sum()), effective);
        static double Kernel(double s, double t)
        {
            double q = Math.PI * (Math.Sin(s) + Math.Sin(t)), sinc = Math.Abs(q) < 1e-12 ? 1 : Math.Sin(q) / q, c = Math.Cos(s) + Math.Cos(t);
            return Math.PI / N * c * c * sinc * sinc;
        }
    }

    static double[] Iterated(int steps)
    {
        double[] x = [.. Counts.Select(_ => 76.25)];
        for (int step = 0; step < steps; step++)
        {
            double[] means = Folded(x);
            x = [.. x.Select((value, j) => value * Smearing.Select((row, i) => row[j] * Counts[i] / means[i]).Sum() / Smearing.Sum(row => row[j]))];
        }
        return x;
    }

    static double[] Folded(double[] x) => [.. Smearing.Select(row => row.Zip(x, (a, b) => a * b).Sum())];
}
