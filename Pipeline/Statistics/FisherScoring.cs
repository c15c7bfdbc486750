using System.Numerics.Tensors;
using Pipeline.Numerics;

namespace Pipeline.Statistics;

/// <summary>Expected counts of a model, its derivatives by columns.</summary>
/// <param name="parameters">[p].</param>
/// <param name="means">[n] to be filled.</param>
/// <returns>[p][n]; may be overwritten by the next call.</returns>
delegate double[][] ColumnFunction(ReadOnlySpan<double> parameters, Span<double> means);

/// <summary>Repeats a fit from a start that is nearly the solution, by normal equations with the expected information.</summary>
/// <remarks>Ten times faster than <see cref="PoissonFit"/>, whose factorisation is the safer: what does not go straight to its end is left to that.</remarks>
/// <param name="model">Means and derivatives.</param>
/// <param name="counts">[n] observed.</param>
/// <param name="priors">[rows][p] linear forms with a unit normal prior about zero.</param>
/// <param name="variance">[n] of bins that count by their chi-square; null: Poisson counts.</param>
sealed class FisherScoring(ColumnFunction model, double[] counts, IReadOnlyList<double[]> priors, double[]? variance)
{
    const int Most = 25, MostHalvings = 4;
    const double SmallestMean = 1e-9;

    /// <summary>Fall of the deviance in the last step, by the quadratic model: 1e-8 is 1e-4 of a standard error.</summary>
    const double Left = 1e-8;

    /// <summary>The solution, or null where the way there is not straight: steps that do not get shorter, a bound, an information that is singular.</summary>
    public double[]? Find(double[] start, double[] low, double[] high)
    {
        int p = start.Length;
        double[] x = [.. start], step = new double[p], means = new double[counts.Length], information = new double[p * p];
        double before = double.PositiveInfinity;
        for (int round = 0, halvings = 0; round < Most; round++)
        {
            double[][] columns = model(x, means);
            double objective = Objective(means, x);
            if (!(objective <= before + 1e-9 * Math.Abs(before)))
            {
                if (++halvings > MostHalvings) return null;
                for (int k = 0; k < p; k++) x[k] -= step[k] *= 0.5;
                continue;
            }
            (before, halvings) = (objective, 0);
            double[] score = Score(columns, means, x, information);
            if (!Cholesky.Factor(information, p, p)) return null;
            score.CopyTo(step, 0);
            Cholesky.Solve(information, p, p, step);
            for (int k = 0; k < p; k++)
                if (!((x[k] += step[k]) > low[k] && x[k] < high[k])) return null;
            if (Cholesky.Dot(score, step) < Left) return x;
        }
        return null;
    }

    /// <summary>[p] score, with the information beside it.</summary>
    double[] Score(double[][] columns, double[] means, double[] x, double[] information)
    {
        (int n, int p) = (counts.Length, x.Length);
        double[] weights = new double[n], pulls = new double[n], weighted = new double[n], score = new double[p];
        for (int i = 0; i < n; i++)
        {
            weights[i] = 1 / (variance?[i] ?? Math.Max(means[i], SmallestMean));
            pulls[i] = weights[i] * (counts[i] - means[i]);
        }
        for (int a = 0; a < p; a++)
        {
            TensorPrimitives.Multiply(columns[a], weights, weighted);
            for (int b = 0; b <= a; b++) information[a * p + b] = Cholesky.Dot(weighted, columns[b]);
            score[a] = Cholesky.Dot(pulls, columns[a]);
        }
        foreach (double[] row in priors)
        {
            double off = Cholesky.Dot(row, x);
            for (int a = 0; a < p; a++)
            {
                if (row[a] == 0) continue;
                score[a] -= off * row[a];
                for (int b = 0; b <= a; b++) information[a * p + b] += row[a] * row[b];
            }
        }
        return score;
    }

    double Objective(double[] means, double[] x)
    {
        double sum = 0;
        for (int i = 0; i < means.Length; i++)
            sum += variance is null ? PoissonDeviance.Of(counts[i], Math.Max(means[i], SmallestMean)) : (means[i] - counts[i]) * (means[i] - counts[i]) / variance[i];
        foreach (double[] row in priors)
        {
            double off = Cholesky.Dot(row, x);
            sum += off * off;
        }
        return sum;
    }
}
