using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Fitting;

/// <summary>Profile-likelihood intervals of the parameters of a shape.</summary>
public class ShapeIntervalTests
{
    /// <remarks>v^3 exp(-((v - u)/alpha)^2), flux detector, 1 m, instant emission, 20 bins of 0.5 ms from 3 to 13 ms, number and constant background
    /// free. Expected results: this team, with two independent general-purpose libraries.</remarks>
    [Fact]
    public void Of_WholeCounts_MatchesReference()
    {
        var axis = new SignalAxis(0, 0.5e-3, [.. Enumerable.Range(6, 21)], []);
        var grid = new VelocityGrid(20, 320, 0.1);
        // molecules of a cell that arrive in a bin: cells are narrow, and hold theirs evenly
        double[][] columns = [.. Enumerable.Range(0, grid.Cells).Select(c => Enumerable.Range(0, 20).Select(i =>
            Math.Max(0, Math.Min(grid.Edge(c + 1), 1 / axis.StartSeconds(i)) - Math.Max(grid.Edge(c), 1 / axis.EndSeconds(i))) / grid.Step).ToArray())];
        var signal = new NetSignal
        {
            Axis = axis, Condition = "off", DetectorKind = DetectorKind.Counting, Shots = 1, Live = [.. Enumerable.Repeat(1.0, 20)],
            Total = [2, 5, 3, 67, 503, 1416, 2120, 2104, 1596, 1013, 573, 306, 161, 80, 38, 23, 15, 5, 3, 6],
            Background = new double[20], BackgroundVariance = new double[20],
            // a prior of 1000 counts a bin leaves the background free
            Causes = [new CommonCause("background", [.. Enumerable.Repeat(1000.0, 20)])],
        };
        FittedSpectrum fit = new ShapeEstimator("supersonic", 3).Fit(new FitWindow(signal, 0, null), new ResponseMatrix(axis, grid, columns));
        Assert.Null(fit.Doubt);
        (ShapeParameter number, ShapeParameter u, ShapeParameter alpha) = (fit.Parameters[0], fit.Parameters[1], fit.Parameters[2]);
        // cells that are cut by a bin's edge hold theirs evenly: 0.0009 m/s in u for cells of 0.5 m/s, and a twenty-fifth of it here
        Assert.Equal(9985.527, number.Value, 0.01);
        Assert.Equal(140.0695, u.Value, 1e-4);
        Assert.Equal(29.8971, alpha.Value, 1e-4);
        Assert.Equal(6.60872, fit.Deviance, 1e-4);
        Assert.Equal(-0.2795, u.Low - u.Value, 1e-4);
        Assert.Equal(0.2772, u.High - u.Value, 1e-4);
        Assert.Equal(-0.2505, alpha.Low - alpha.Value, 1e-4);
        Assert.Equal(0.2530, alpha.High - alpha.Value, 1e-4);
        Assert.Equal(2.7606, fit.Means[0] - fit.Molecules.Zip(columns, (m, c) => m * c[0]).Sum(), 2e-3);
    }

    /// <summary>68.27 % of 200 is 136.5; the binomial standard deviation is 6.6, and three of them are 10 %.</summary>
    [Fact]
    public void Of_PoissonDraws_CoversTheTruth()
    {
        double[] truth = [100, 140, 30];
        const int Draws = 200;
        var covered = new int[3];
        var family = new SupersonicFamily(ShapeRuns.Grid, 3);
        Parallel.For(0, Draws, d =>
        {
            var problem = new ShapeProblem(ShapeRuns.Drawn(ShapeRuns.Beam(truth[0], truth[1], truth[2]), 1000 + d), ShapeRuns.Response, family);
            ShapeParameter[] found = ShapeProfile.Of(new ShapeSearch(problem, problem.Find(truth), 1, 1, 3, null)).Parameters;
            for (int k = 0; k < 3; k++)
                if (truth[k] >= found[k].Low && truth[k] <= found[k].High) Interlocked.Increment(ref covered[k]);
        });
        Assert.All(covered, c => Assert.InRange((double)c / Draws, 0.58, 0.78));
    }

    /// <summary>A beam that barely shows above the background: the number ends at its bound, and the interval says so.</summary>
    [Fact]
    public void Of_NothingThere_EndsAtZero()
    {
        ShapeSearch search = ShapeSearch.Of(new ShapeProblem(ShapeRuns.Drawn(ShapeRuns.Beam(0.02, 140, 30), 3), ShapeRuns.Response, new SupersonicFamily(ShapeRuns.Grid, 3)));
        ShapeParameter number = ShapeProfile.Of(search).Parameters[0];
        Assert.True(number.High > number.Value);
        Assert.True(number.Low >= 0 && number.Low <= number.Value);
    }
}
