using System.Globalization;
using MathNet.Numerics.Integration;
using Pipeline.Response;
using Pipeline.Statistics;

namespace Pipeline.Fitting;

/// <summary>One supersonic beam: dN/dv proportional to v^3 exp(-((v - u)/alpha)^2), the flux of a drifting gas.</summary>
/// <remarks>Maximum likelihood over number, u and alpha from several starts; the best counts.</remarks>
sealed class ShapeEstimator : ISpectrumEstimator
{
    /// <summary>Power of v in the flux; other conventions exist, so it stands in every report.</summary>
    public const int Power = 3;

    public string Name => "shape";

    public FittedSpectrum Fit(FitWindow window, ResponseMatrix response)
    {
        var problem = new ShapeProblem(window, response);
        PoissonFit fit = problem.Starts().Select(s => problem.Find(s)).Aggregate((a, b) => b.Deviance < a.Deviance ? b : a);
        double[] molecules = problem.Molecules(fit.Parameters);
        return new ShapeSpectrum(fit.Parameters)
        {
            Molecules = molecules,
            Moments = SpectrumMoments.Of(response.Grid, molecules),
            Means = problem.Means(fit.Parameters),
            Deviance = fit.Deviance,
            DegreesOfFreedom = window.Count - 3,
            Doubt = DoubtOf(fit, window.Count - 3),
            Description = string.Create(CultureInfo.InvariantCulture,
                $"v^{Power} exp(-((v-u)/alpha)^2) with u = {fit.Parameters[1]:F1} m/s, alpha = {fit.Parameters[2]:F1} m/s"),
        };
    }

    /// <summary>Deviances beyond this chance say that the shape is wrong.</summary>
    const double PoorFit = 1e-4;

    static string? DoubtOf(PoissonFit fit, int freedom) =>
        !fit.Converged ? "the shape fit did not converge"
        : fit.AtBound[1] || fit.AtBound[2] ? "the shape fit ran into a bound of its parameters"
        : Tail.ChiSquare(fit.Deviance, freedom) < PoorFit ? "one supersonic beam does not describe the signal"
        : null;
}

sealed class ShapeSpectrum(double[] parameters) : FittedSpectrum
{
    public override Refitted Refit(FitWindow window, ResponseMatrix response)
    {
        var problem = new ShapeProblem(window, response);
        double[] molecules = problem.Molecules(problem.Find(problem.Adapt(parameters)).Parameters);
        return new Refitted(molecules, SpectrumMoments.Of(response.Grid, molecules));
    }
}

/// <summary>The likelihood of one supersonic beam in a window. Parameters: molecules a shot, u, alpha, then amplitudes of causes.</summary>
sealed class ShapeProblem
{
    static readonly GaussLegendreRule Rule = new(-0.5, 0.5, 3);
    readonly FitWindow _window;
    readonly VelocityGrid _grid;
    readonly Design _design;
    readonly double[]? _variance;

    public ShapeProblem(FitWindow window, ResponseMatrix response)
    {
        (_window, _grid, _design) = (window, response.Grid, new Design(window, response));
        // weights come from the neighbourhood: a bin's own count would pull the fit towards its downward fluctuations
        if (window.TotalVariance is not null || window.ExtraVariance.Any(v => v > 0))
            _variance = [.. Numerics.LocalMean.Of(window.Total, 5).Select((t, i) => window.Variance(i, Math.Max(t, 0.1)))];
    }

    public IEnumerable<double[]> Starts()
    {
        double centre = RoughMean();
        foreach (double u in (double[])[0.85, 1, 1.1])
            foreach (double alpha in (double[])[0.1, 0.25])
            {
                double[] start = [1, u * centre, alpha * centre, .. new double[_window.Causes.Length]];
                start[0] = NetCounts() / Math.Max(_design.Means(With(Molecules(start))).Sum() - _window.Background.Sum(), 1e-9);
                yield return start;
            }
    }

    /// <summary>The start of a repeated fit, for a window with another number of causes.</summary>
    public double[] Adapt(double[] parameters)
    {
        double[] start = new double[3 + _window.Causes.Length];
        parameters.AsSpan(0, Math.Min(parameters.Length, start.Length)).CopyTo(start);
        return start;
    }

    public PoissonFit Find(double[] start)
    {
        int causes = _window.Causes.Length;
        double top = _grid.Edge(_grid.Cells);
        double[] low = [0, -top, 0.3 * _grid.Step, .. Enumerable.Repeat(-20.0, causes)];
        double[] high = [1e15, 1.5 * top, top, .. Enumerable.Repeat(20.0, causes)];
        return PoissonFit.Find(Model, _window.Total, start, low, high, priorFrom: 3, _variance);
    }

    public double[] Means(double[] x) => _design.Means([.. Molecules(x), .. x[3..]]);

    /// <summary>[cells] molecules a shot.</summary>
    public double[] Molecules(ReadOnlySpan<double> x)
    {
        var molecules = new double[_grid.Cells];
        Fill(x, molecules, [], []);
        return molecules;
    }

    void Model(ReadOnlySpan<double> x, Span<double> means, Span<double> slopes)
    {
        int p = x.Length, cells = _grid.Cells;
        var (molecules, byU, byAlpha) = (new double[cells], new double[cells], new double[cells]);
        Fill(x, molecules, byU, byAlpha);
        _design.Means([.. molecules, .. x[3..]]).CopyTo(means);
        if (slopes.IsEmpty) return;
        double[][] columns = [Without(With(molecules)), Without(With(byU)), Without(With(byAlpha)), .. _window.Causes];
        for (int i = 0; i < _window.Count; i++)
            for (int k = 0; k < p; k++)
                slopes[i * p + k] = k == 0 ? columns[0][i] / Math.Max(x[0], 1e-300) : columns[k][i];
    }

    double[] With(double[] molecules) => [.. molecules, .. new double[_window.Causes.Length]];

    double[] Without(double[] molecules) => [.. _design.Means(molecules).Zip(_window.Background, (m, b) => m - b)];

    /// <summary>Molecules of each cell and their derivatives; normalised to the number over the grid.</summary>
    void Fill(ReadOnlySpan<double> x, double[] molecules, double[] byU, double[] byAlpha)
    {
        (double number, double u, double alpha) = (x[0], x[1], x[2]);
        (double total, double totalU, double totalAlpha) = (0, 0, 0);
        // the exponent is taken relative to its largest value on the grid, so that a beam far outside does not underflow
        double nearest = Math.Clamp(u, _grid.From, _grid.Edge(_grid.Cells)), shift = Square((nearest - u) / alpha);
        for (int c = 0; c < molecules.Length; c++)
            for (int k = 0; k < Rule.Order; k++)
            {
                double v = _grid.Centre(c) + _grid.Step * Rule.GetAbscissa(k), z = (v - u) / alpha;
                double f = Rule.GetWeight(k) * v * v * v * Math.Exp(shift - z * z), fu = f * 2 * z / alpha, fa = f * 2 * z * z / alpha;
                molecules[c] += f;
                (total, totalU, totalAlpha) = (total + f, totalU + fu, totalAlpha + fa);
                if (byU.Length > 0) (byU[c], byAlpha[c]) = (byU[c] + fu, byAlpha[c] + fa);
            }
        for (int c = 0; c < molecules.Length; c++)
        {
            molecules[c] /= total;
            if (byU.Length > 0)
            {
                byU[c] = number * (byU[c] - molecules[c] * totalU) / total;
                byAlpha[c] = number * (byAlpha[c] - molecules[c] * totalAlpha) / total;
            }
            molecules[c] *= number;
        }
    }

    /// <summary>Mean velocity by the cell that contributes most to each bin.</summary>
    double RoughMean()
    {
        double[] unit = new double[_design.Variables];
        (double sum, double weight) = (0, 0);
        double[] net = [.. _window.Total.Zip(_window.Background, (t, b) => t - b)];
        for (int c = 0; c < _grid.Cells; c++)
        {
            unit[c] = 1;
            double[] column = Without(unit);
            unit[c] = 0;
            double norm = column.Sum(Math.Abs);
            if (norm <= 0) continue;
            double share = Math.Max(0, column.Zip(net, (a, n) => a * n).Sum() / norm);
            // an overlap counts the density of counts: squared, it follows the peak rather than the background's noise
            (sum, weight) = (sum + share * share * _grid.Centre(c), weight + share * share);
        }
        return weight > 0 ? sum / weight : 0.5 * (_grid.From + _grid.Edge(_grid.Cells));
    }

    double NetCounts() => Math.Max(1, _window.Total.Sum() - _window.Background.Sum());

    static double Square(double x) => x * x;
}
