using Pipeline.Numerics;

namespace Pipeline.Tests.Numerics;

public class NonNegativeQuadraticTests
{
    /// <remarks>Non-negative least squares of Lawson and Hanson (1974); solutions and residuals recomputed by this team with a
    /// general-purpose library. The second matrix is a commonly used example, from memory.</remarks>
    [Theory]
    [InlineData(new double[] { 1, 2, 0, 0, 1, 1, 1, 0, 1, 2, 1, 3 }, new double[] { 1, -1, 2, 1 }, 0.8333333, 1.6832508)]
    [InlineData(new double[] { 73, 71, 52, 87, 74, 46, 72, 2, 7, 80, 89, 71 }, new double[] { 49, 67, 68, 20 }, 0.64953844, 39.8125581)]
    public void Solve_KnownProblems_MatchesLawsonHanson(double[] a, double[] b, double first, double residual)
    {
        double[] h = new double[9], g = new double[3];
        for (int i = 0; i < 4; i++)
            for (int j = 0; j < 3; j++)
            {
                g[j] += a[i * 3 + j] * b[i];
                for (int k = 0; k < 3; k++) h[j * 3 + k] += a[i * 3 + j] * a[i * 3 + k];
            }
        var solver = new NonNegativeQuadratic(3, 3);
        Assert.True(solver.Solve(h, g));
        Assert.Equal(first, solver.X[0], 7);
        Assert.Equal([0, 0], solver.X[1..]);
        double sum = 0;
        for (int i = 0; i < 4; i++) sum += Math.Pow(a[i * 3] * solver.X[0] - b[i], 2);
        Assert.Equal(residual, Math.Sqrt(sum), 6);
    }

    [Fact]
    public void Solve_FreeVariable_MayBeNegative()
    {
        // (x - 1)^2 + (y + 2)^2, x bounded, y free
        var solver = new NonNegativeQuadratic(2, 1);
        Assert.True(solver.Solve([1, 0, 0, 1], [1, -2]));
        Assert.Equal([1, -2], solver.X);
    }

    [Fact]
    public void Solve_RandomProblems_MeetsTheConditionsOfAMinimum()
    {
        var random = new Random(5);
        for (int trial = 0; trial < 50; trial++)
        {
            (double[] h, double[] g) = Problem(random, 30);
            var solver = new NonNegativeQuadratic(N, N);
            Assert.True(solver.Solve(h, g));
            AssertMinimum(solver.X, h, g);
        }
    }

    /// <summary>The start decides how many steps are taken, not where they end.</summary>
    /// <remarks>Rows fewer than variables make columns so alike that exchanging blocks goes round in circles in some of the problems.</remarks>
    [Theory]
    [InlineData(30)]
    [InlineData(12)]
    public void Solve_AnyStart_EndsAtTheSameMinimum(int rows)
    {
        var random = new Random(6);
        for (int trial = 0; trial < 50; trial++)
        {
            (double[] h, double[] g) = Problem(random, rows);
            NonNegativeQuadratic cold = new(N, N), warm = new(N, N), full = new(N, N);
            Assert.True(cold.Solve(h, g));
            AssertMinimum(cold.X, h, g);
            warm.StartFrom(cold);
            Assert.True(warm.Solve(h, [.. g.Select(v => v + 0.2 * (random.NextDouble() - 0.5))]));
            Array.Fill(full.X, 1);
            Array.Fill(full.Passive, true);
            foreach (NonNegativeQuadratic other in (NonNegativeQuadratic[])[warm, full])
            {
                Assert.True(other.Solve(h, g));
                // the solver's tolerance of 1e-10 over a least eigenvalue of about 1e-3
                for (int a = 0; a < N; a++) Assert.Equal(cold.X[a], other.X[a], 1e-7 * Math.Max(1, cold.X.Max()));
            }
        }
    }

    const int N = 25;

    static (double[] H, double[] G) Problem(Random random, int rows)
    {
        double[] a = [.. Enumerable.Range(0, rows * N).Select(_ => random.NextDouble() - 0.4)], h = new double[N * N];
        double[] g = [.. Enumerable.Range(0, N).Select(_ => random.NextDouble() - 0.5)];
        for (int i = 0; i < rows; i++) for (int j = 0; j < N; j++) for (int k = 0; k < N; k++) h[j * N + k] += a[i * N + j] * a[i * N + k];
        for (int j = 0; j < N; j++) h[j * N + j] += rows < N ? 1e-3 : 1e-6;
        return (h, g);
    }

    static void AssertMinimum(double[] x, double[] h, double[] g)
    {
        for (int a = 0; a < N; a++)
        {
            double slope = Enumerable.Range(0, N).Sum(b => h[a * N + b] * x[b]) - g[a];
            Assert.True(x[a] >= 0);
            // rounding of sums of 25 terms of order one
            if (x[a] > 0) Assert.InRange(slope, -1e-7, 1e-7);
            else Assert.True(slope >= -1e-7);
        }
    }
}
