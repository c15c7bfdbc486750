using Pipeline.Numerics;

namespace Pipeline.Tests.Numerics;

public class CholeskyTests
{
    /// <summary>Orders on both sides of every block of four rows and of the vectors in them; rows longer than the order, as the solvers have them.</summary>
    [Fact]
    public void FactorAndSolve_EveryOrderUpToForty_GiveBackMatrixAndSolution()
    {
        var random = new Random(8);
        for (int n = 1; n <= 40; n++)
        {
            int stride = n + n % 3;
            double[] a = Matrix(random, n, stride), factor = [.. a], x = [.. Enumerable.Range(0, n).Select(_ => random.NextDouble() - 0.5)];
            double[] b = [.. Enumerable.Range(0, n).Select(i => Enumerable.Range(0, n).Sum(k => a[i * stride + k] * x[k]))];
            Assert.True(Cholesky.Factor(factor, n, stride));
            for (int i = 0; i < n; i++)
                for (int j = 0; j <= i; j++)
                    Assert.Equal(a[i * stride + j], Enumerable.Range(0, j + 1).Sum(k => factor[i * stride + k] * factor[j * stride + k]), 1e-12);
            Cholesky.Solve(factor, n, stride, b);
            // the diagonal of at least one keeps the condition below a hundred
            for (int i = 0; i < n; i++) Assert.Equal(x[i], b[i], 1e-12);
        }
    }

    [Theory]
    [InlineData(0)]
    [InlineData(3)]
    [InlineData(4)]
    [InlineData(10)]
    public void Factor_OnePivotNotPositive_SaysSo(int at)
    {
        double[] a = Matrix(new Random(9), 11, 11);
        a[at * 11 + at] = 0;
        Assert.False(Cholesky.Factor(a, 11, 11));
    }

    static double[] Matrix(Random random, int n, int stride)
    {
        double[] rows = [.. Enumerable.Range(0, n * n).Select(_ => random.NextDouble() - 0.5)], a = new double[n * stride];
        for (int i = 0; i < n; i++)
            for (int j = 0; j < n; j++)
                a[i * stride + j] = (i == j ? 1 : 0) + Enumerable.Range(0, n).Sum(k => rows[i * n + k] * rows[j * n + k]);
        return a;
    }
}
