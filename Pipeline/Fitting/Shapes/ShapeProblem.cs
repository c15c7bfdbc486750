using System.Numerics.Tensors;
using Pipeline.Response;
using Pipeline.Statistics;

namespace Pipeline.Fitting;

/// <summary>The likelihood of one family in a window. Parameters: those of the family, then amplitudes of causes with unit normal priors.</summary>
/// <remarks>Has working space of its own: one for each thread.</remarks>
sealed class ShapeProblem
{
    readonly FitWindow _window;
    readonly ResponseMatrix _response;
    readonly PoissonObjective _objective;
    readonly FisherScoring _scoring;
    readonly double[] _molecules, _low, _high;
    readonly double[][] _slopes, _columns;

    public ShapeProblem(FitWindow window, ResponseMatrix response, IShapeFamily family)
    {
        (_window, _response, Family) = (window, response, family);
        _molecules = new double[response.Grid.Cells];
        _slopes = [.. Enumerable.Range(0, Own).Select(_ => new double[response.Grid.Cells])];
        _columns = [.. Enumerable.Range(0, Own).Select(_ => new double[window.Count]), .. window.Causes];
        int causes = window.Causes.Length, all = Own + causes;
        _low = [.. family.Coordinates.Select(c => c.Low), .. Enumerable.Repeat(-20.0, causes)];
        _high = [.. family.Coordinates.Select(c => c.High), .. Enumerable.Repeat(20.0, causes)];
        double[][] priors = [.. family.Priors.Select(row => (double[])[.. row, .. new double[causes]]), .. Enumerable.Range(Own, causes).Select(k => Unit(k, all))];
        double[]? variance = Variance(window);
        _objective = new PoissonObjective(Model, window.Total, all, priors, variance);
        _scoring = new FisherScoring(Columns, window.Total, priors, variance);
    }

    public IShapeFamily Family { get; }

    /// <summary>Parameters of the family.</summary>
    public int Own => Family.Coordinates.Count;

    public int Bins => _window.Count;

    public IEnumerable<double[]> Starts()
    {
        double net = Math.Max(1, _window.Total.Sum() - _window.Background.Sum());
        foreach (double[] start in Family.Starts(RoughMean()))
        {
            Family.Fill(start, _molecules, _slopes);
            var counts = new double[Bins];
            Fold(_molecules, counts);
            yield return Adapt(Family.Scale(start, net / Math.Max(counts.Sum(), 1e-9)));
        }
    }

    /// <summary>A start with the causes of this window, which may be another number of them.</summary>
    public double[] Adapt(double[] parameters)
    {
        double[] start = new double[_low.Length];
        parameters.AsSpan(0, Math.Min(parameters.Length, start.Length)).CopyTo(start);
        return start;
    }

    public PoissonFit Find(double[] start, double tolerance = Numerics.LeastSquares.Tightest) => PoissonFit.Find(_objective, start, _low, _high, tolerance);

    /// <summary>[p] of a fit that began nearly at its end.</summary>
    public double[] Repeat(double[] start) => _scoring.Find(start, _low, _high) ?? Find(start, RepeatTolerance).Parameters;

    /// <summary>Leaves an error of less than a thousandth of a standard error.</summary>
    const double RepeatTolerance = 1e-7;

    /// <summary>The best fit with one parameter held.</summary>
    public PoissonFit FindHeld(double[] start, int held, double value, double tolerance)
    {
        double[] low = [.. _low], high = [.. _high], from = [.. start];
        low[held] = high[held] = from[held] = value;
        return PoissonFit.Find(_objective, from, low, high, tolerance);
    }

    public bool IsMinimum(PoissonFit fit) => fit.IsMinimum(_objective);

    /// <summary>[bins] expected totals.</summary>
    public double[] Means(double[] x)
    {
        var means = new double[Bins];
        Model(x, means, []);
        return means;
    }

    /// <summary>[cells] molecules a shot.</summary>
    public double[] Molecules(double[] x)
    {
        Family.Fill(x.AsSpan(0, Own), _molecules, _slopes);
        return [.. _molecules];
    }

    /// <summary>Means and derivatives; the response is applied once for each parameter.</summary>
    internal void Model(ReadOnlySpan<double> x, Span<double> means, Span<double> slopes)
    {
        int p = x.Length;
        double[][] columns = Columns(x, means);
        if (slopes.IsEmpty) return;
        for (int k = 0; k < p; k++)
            for (int i = 0; i < columns[k].Length; i++) slopes[i * p + k] = columns[k][i];
    }

    double[][] Columns(ReadOnlySpan<double> x, Span<double> means)
    {
        Family.Fill(x[..Own], _molecules, _slopes);
        Fold(_molecules, means);
        TensorPrimitives.Add(means, _window.Background, means);
        for (int k = Own; k < x.Length; k++) TensorPrimitives.MultiplyAdd(_window.Causes[k - Own], x[k], means, means);
        for (int k = 0; k < Own; k++) Fold(_slopes[k], _columns[k]);
        return _columns;
    }

    /// <summary>Counts in the window of molecules a shot.</summary>
    void Fold(double[] molecules, Span<double> counts)
    {
        counts.Clear();
        for (int c = 0; c < molecules.Length; c++)
        {
            if (molecules[c] == 0) continue;
            ReadOnlySpan<double> column = Part(c, out int at);
            Span<double> target = counts.Slice(at, column.Length);
            TensorPrimitives.MultiplyAdd(column, molecules[c], target, target);
        }
        TensorPrimitives.Multiply(counts, _window.Exposure, counts);
    }

    /// <summary>What a cell leaves in the window, and from which of its bins on.</summary>
    ReadOnlySpan<double> Part(int cell, out int at)
    {
        ReadOnlySpan<double> column = _response.Column(cell);
        int first = _response.First(cell), from = Math.Max(first, _window.First), to = Math.Min(first + column.Length, _window.First + _window.Count);
        at = from >= to ? 0 : from - _window.First;
        return from >= to ? [] : column[(from - first)..(to - first)];
    }

    /// <summary>Mean velocity by the cell that contributes most to each bin.</summary>
    double RoughMean()
    {
        (double sum, double weight) = (0, 0);
        for (int c = 0; c < _molecules.Length; c++)
        {
            ReadOnlySpan<double> column = Part(c, out int at);
            (double overlap, double norm) = (0, 0);
            for (int k = 0; k < column.Length; k++)
            {
                double counts = column[k] * _window.Exposure[at + k];
                (overlap, norm) = (overlap + counts * (_window.Total[at + k] - _window.Background[at + k]), norm + Math.Abs(counts));
            }
            if (norm <= 0) continue;
            double share = Math.Max(0, overlap / norm);
            // an overlap counts the density of counts: squared, it follows the peak rather than the background's noise
            (sum, weight) = (sum + share * share * _response.Grid.Centre(c), weight + share * share);
        }
        return weight > 0 ? sum / weight : 0.5 * (_response.Grid.From + _response.Grid.To);
    }

    /// <summary>Weights come from the neighbourhood: a bin's own count would pull the fit towards its downward fluctuations.</summary>
    static double[]? Variance(FitWindow window) => window.TotalVariance is null && !window.ExtraVariance.Any(v => v > 0) ? null
        : [.. Numerics.LocalMean.Of(window.Total, 5).Select((t, i) => window.Variance(i, Math.Max(t, 0.1)))];

    static double[] Unit(int k, int length)
    {
        var row = new double[length];
        row[k] = 1;
        return row;
    }
}
