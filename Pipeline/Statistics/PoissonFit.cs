using Pipeline.Numerics;

namespace Pipeline.Statistics;

/// <summary>Expected counts of a model.</summary>
/// <param name="parameters">[p].</param>
/// <param name="means">[n] to be filled; positive.</param>
/// <param name="derivatives">[n * p] row-major, to be filled; empty where only means are wanted.</param>
delegate void MeanFunction(ReadOnlySpan<double> parameters, Span<double> means, Span<double> derivatives);

/// <summary>Maximum-likelihood fit of a model to Poisson counts.</summary>
/// <param name="Parameters">[p].</param>
/// <param name="Deviance">Of the counts, without the priors.</param>
/// <param name="Prior">Sum of squares of what carries a prior.</param>
/// <param name="Covariance">[p * p] row-major, inverse of the expected information; null where that is singular.</param>
/// <param name="Converged">Whether a minimum was reached.</param>
/// <param name="AtBound">[p].</param>
sealed record PoissonFit(double[] Parameters, double Deviance, double Prior, double[]? Covariance, bool Converged, bool[] AtBound)
{
    /// <summary>What was minimised.</summary>
    public double Objective => Deviance + Prior;

    /// <param name="model">Means and derivatives.</param>
    /// <param name="counts">[n] observed.</param>
    /// <param name="start">[p].</param>
    /// <param name="low">[p].</param>
    /// <param name="high">[p].</param>
    public static PoissonFit Find(MeanFunction model, double[] counts, double[] start, double[] low, double[] high) =>
        Find(new PoissonObjective(model, counts, start.Length, [], null), start, low, high);

    /// <param name="objective">The problem.</param>
    /// <param name="start">[p].</param>
    /// <param name="low">[p].</param>
    /// <param name="high">[p]; a parameter whose bounds coincide is held.</param>
    /// <param name="tolerance">Gradient at which the search ends, relative to residuals and derivatives.</param>
    public static PoissonFit Find(PoissonObjective objective, double[] start, double[] low, double[] high, double tolerance = LeastSquares.Tightest)
    {
        int p = start.Length;
        LeastSquaresResult fit = LeastSquares.Minimise(objective.Fill, objective.Residuals, start, low, high, tolerance);
        var residuals = new double[objective.Residuals];
        objective.Fill(fit.Parameters, residuals, []);
        int n = objective.Means.Length;
        (double deviance, double prior) = (Cholesky.Dot(residuals.AsSpan(0, n), residuals.AsSpan(0, n)), Cholesky.Dot(residuals.AsSpan(n), residuals.AsSpan(n)));
        return new PoissonFit(fit.Parameters, deviance, prior, Invert(objective.Information(), p, fit.AtBound), fit.Converged, fit.AtBound);
    }

    /// <summary>Whether the sum of squares rises in every direction that the bounds leave: the gradient is far below what one standard error
    /// makes, and the matrix of second derivatives is positive definite.</summary>
    /// <remarks>Central differences of the analytic gradient, in steps of a hundredth of a standard error.</remarks>
    public bool IsMinimum(PoissonObjective objective)
    {
        if (Covariance is null) return false;
        int p = Parameters.Length;
        int[] free = [.. Enumerable.Range(0, p).Where(k => !AtBound[k])];
        int m = free.Length;
        double[] sigma = [.. free.Select(k => Math.Sqrt(Covariance[k * p + k]))], gradient = objective.Gradient(Parameters);
        // a parameter without information has no variance here: nothing says that this is its best value
        if (sigma.Any(s => s == 0) || free.Where((k, a) => Math.Abs(gradient[k]) * sigma[a] > 1e-3).Any()) return false;
        var hessian = new double[m * m];
        for (int a = 0; a < m; a++)
        {
            double[] up = [.. Parameters], down = [.. Parameters];
            (up[free[a]], down[free[a]]) = (up[free[a]] + 0.01 * sigma[a], down[free[a]] - 0.01 * sigma[a]);
            (double[] above, double[] below) = (objective.Gradient(up), objective.Gradient(down));
            for (int b = 0; b < m; b++) hessian[a * m + b] = (above[free[b]] - below[free[b]]) * sigma[b] / 0.02;
        }
        for (int a = 0; a < m; a++)
            for (int b = 0; b < a; b++) hessian[a * m + b] = 0.5 * (hessian[a * m + b] + hessian[b * m + a]);
        return Cholesky.Factor(hessian, m, m);
    }

    /// <summary>Inverse over the parameters that are off their bounds and move the means; the others get zero variance.</summary>
    static double[]? Invert(double[] information, int p, bool[] atBound)
    {
        int[] free = [.. Enumerable.Range(0, p).Where(k => !atBound[k] && information[k * p + k] > 0)];
        int m = free.Length;
        var covariance = new double[p * p];
        if (m == 0) return covariance;
        double[] scale = [.. free.Select(k => Math.Sqrt(information[k * p + k]))];
        var factor = new double[m * m];
        for (int a = 0; a < m; a++)
            for (int b = 0; b < m; b++) factor[a * m + b] = information[free[a] * p + free[b]] / (scale[a] * scale[b]);
        if (!Cholesky.Factor(factor, m, m)) return null;
        for (int c = 0; c < m; c++)
        {
            var column = new double[m];
            column[c] = 1;
            Cholesky.Solve(factor, m, m, column);
            for (int a = 0; a < m; a++) covariance[free[a] * p + free[c]] = column[a] / (scale[a] * scale[c]);
        }
        return covariance;
    }
}
