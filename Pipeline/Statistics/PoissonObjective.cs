using Pipeline.Numerics;

namespace Pipeline.Statistics;

/// <summary>Deviance of counts and normal priors, as residuals whose squares add up to it.</summary>
/// <remarks>Means and derivatives are taken in one pass and kept: a search asks for the residuals of a trial first, and for the derivatives of the
/// same point if it accepts it.</remarks>
sealed class PoissonObjective
{
    /// <summary>No mean is taken as smaller, so that an empty bin with a vanishing model does not stop the search.</summary>
    const double SmallestMean = 1e-9;

    readonly MeanFunction _model;
    readonly double[] _counts, _means, _slopes, _last;
    readonly double[]? _variance;
    readonly IReadOnlyList<double[]> _priors;
    readonly int _n, _p;

    /// <param name="model">Means and derivatives.</param>
    /// <param name="counts">[n] observed.</param>
    /// <param name="parameters">p.</param>
    /// <param name="priors">[rows][p] linear forms with a unit normal prior about zero.</param>
    /// <param name="variance">[n] of bins that are not Poisson counts, and then count by their chi-square; null: all are.</param>
    public PoissonObjective(MeanFunction model, double[] counts, int parameters, IReadOnlyList<double[]> priors, double[]? variance)
    {
        (_model, _counts, _priors, _variance, _n, _p) = (model, counts, priors, variance, counts.Length, parameters);
        (_means, _slopes, _last) = (new double[_n], new double[_n * _p], new double[_p]);
        Array.Fill(_last, double.NaN);
    }

    public int Residuals => _n + _priors.Count;

    /// <summary>[n] at the point that was asked for last.</summary>
    public ReadOnlySpan<double> Means => _means;

    /// <summary>Residuals and, where wanted, their derivatives.</summary>
    public void Fill(ReadOnlySpan<double> x, Span<double> r, Span<double> j)
    {
        if (!x.SequenceEqual(_last))
        {
            x.CopyTo(_last);
            _model(x, _means, _slopes);
        }
        for (int i = 0; i < _n; i++)
        {
            r[i] = One(i, out double d);
            if (j.IsEmpty) continue;
            for (int k = 0; k < _p; k++) j[i * _p + k] = d * _slopes[i * _p + k];
        }
        for (int k = 0; k < _priors.Count; k++)
        {
            r[_n + k] = Cholesky.Dot(_priors[k], x);
            if (!j.IsEmpty) _priors[k].CopyTo(j[((_n + k) * _p)..]);
        }
    }

    /// <summary>[p * p] expected information with the priors, at the point that was asked for last.</summary>
    public double[] Information()
    {
        var information = new double[_p * _p];
        for (int i = 0; i < _n; i++)
            Add(information, _slopes.AsSpan(i * _p, _p), 1 / (_variance?[i] ?? Math.Max(_means[i], SmallestMean)));
        foreach (double[] row in _priors) Add(information, row, 1);
        return information;
    }

    /// <summary>[p] half the derivative of the sum of squares.</summary>
    public double[] Gradient(ReadOnlySpan<double> x)
    {
        var (r, j, gradient) = (new double[Residuals], new double[Residuals * _p], new double[_p]);
        Fill(x, r, j);
        for (int i = 0; i < r.Length; i++)
            for (int k = 0; k < _p; k++) gradient[k] += r[i] * j[i * _p + k];
        return gradient;
    }

    double One(int i, out double slope)
    {
        if (_variance is null) return PoissonDeviance.Residual(_counts[i], Math.Max(_means[i], SmallestMean), out slope);
        slope = 1 / Math.Sqrt(_variance[i]);
        return (_means[i] - _counts[i]) * slope;
    }

    void Add(double[] information, ReadOnlySpan<double> row, double weight)
    {
        for (int a = 0; a < _p; a++)
            for (int b = 0; b < _p; b++) information[a * _p + b] += weight * row[a] * row[b];
    }
}
