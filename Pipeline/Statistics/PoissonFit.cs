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
/// <param name="Covariance">[p * p] row-major, inverse of the expected information; null where that is singular.</param>
/// <param name="Converged">Whether a minimum was reached.</param>
/// <param name="AtBound">[p].</param>
sealed record PoissonFit(double[] Parameters, double Deviance, double[]? Covariance, bool Converged, bool[] AtBound)
{
    /// <summary>No mean is taken as smaller, so that an empty bin with a vanishing model does not stop the search.</summary>
    const double SmallestMean = 1e-9;

    /// <param name="model">Means and derivatives.</param>
    /// <param name="counts">[n] observed.</param>
    /// <param name="start">[p].</param>
    /// <param name="low">[p].</param>
    /// <param name="high">[p].</param>
    /// <param name="priorFrom">Parameters from this index on carry a unit normal prior about zero.</param>
    /// <param name="variance">[n] of bins that are not Poisson counts, and then count by their chi-square; null: all are.</param>
    public static PoissonFit Find(MeanFunction model, double[] counts, double[] start, double[] low, double[] high, int? priorFrom = null,
        double[]? variance = null)
    {
        int n = counts.Length, p = start.Length, first = priorFrom ?? p;
        var means = new double[n];
        var slopes = new double[n * p];
        void Residual(ReadOnlySpan<double> x, Span<double> r, Span<double> j)
        {
            model(x, means, j.IsEmpty ? [] : slopes);
            for (int i = 0; i < n; i++)
            {
                r[i] = One(i, out double d);
                if (!j.IsEmpty) for (int k = 0; k < p; k++) j[i * p + k] = d * slopes[i * p + k];
            }
            for (int k = first; k < p; k++)
            {
                int row = n + k - first;
                r[row] = x[k];
                if (j.IsEmpty) continue;
                j.Slice(row * p, p).Clear();
                j[row * p + k] = 1;
            }
        }
        double One(int i, out double slope)
        {
            if (variance is null) return PoissonDeviance.Residual(counts[i], Math.Max(means[i], SmallestMean), out slope);
            slope = 1 / Math.Sqrt(variance[i]);
            return (means[i] - counts[i]) * slope;
        }
        LeastSquaresResult fit = LeastSquares.Minimise(Residual, n + p - first, start, low, high);
        model(fit.Parameters, means, slopes);
        double deviance = 0;
        for (int i = 0; i < n; i++) deviance += Square(One(i, out _));
        double[] weights = [.. means.Select((m, i) => 1 / (variance?[i] ?? Math.Max(m, SmallestMean)))];
        return new PoissonFit(fit.Parameters, deviance, Invert(Information(weights, slopes, p, first), p, fit.AtBound), fit.Converged, fit.AtBound);
    }

    static double Square(double x) => x * x;

    static double[] Information(double[] weights, double[] slopes, int p, int priorFrom)
    {
        var information = new double[p * p];
        for (int i = 0; i < weights.Length; i++)
        {
            for (int a = 0; a < p; a++)
                for (int b = 0; b < p; b++) information[a * p + b] += weights[i] * slopes[i * p + a] * slopes[i * p + b];
        }
        for (int k = priorFrom; k < p; k++) information[k * p + k] += 1;
        return information;
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
