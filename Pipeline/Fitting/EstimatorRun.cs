using Pipeline.Backgrounds;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>One estimator on one window: the fit, its replicas, and its answer to every nuisance.</summary>
sealed class EstimatorRun
{
    readonly ISpectrumEstimator _estimator;
    readonly FitWindow _window;
    readonly VelocityGrid _grid;
    readonly FittedSpectrum _fit;
    readonly Refitted[] _replicas;
    readonly (string Name, Refitted? Up, Refitted? Down)[] _shifted;

    /// <param name="estimator">The estimator.</param>
    /// <param name="window">The data.</param>
    /// <param name="responses">The instrument.</param>
    /// <param name="replicas">The data drawn anew.</param>
    /// <param name="grid">Velocity cells.</param>
    /// <param name="moved">By name, the data where a fact that is no part of the response is moved by plus and minus one standard deviation.</param>
    public EstimatorRun(ISpectrumEstimator estimator, FitWindow window, ShiftedResponses responses, Replicas replicas, VelocityGrid grid,
        IReadOnlyList<(string Name, FitWindow Up, FitWindow Down)>? moved = null)
    {
        (_estimator, _window, _grid) = (estimator, window, grid);
        _fit = estimator.Fit(window, responses.Main);
        _replicas = replicas.Map(w => _fit.Refit(w, responses.Main));
        var shifted = new (string, Refitted?, Refitted?)[responses.Pairs.Count];
        Parallel.For(0, shifted.Length, k =>
        {
            (string name, ResponseMatrix? up, ResponseMatrix? down) = responses.Pairs[k];
            shifted[k] = (name, up is null ? null : _fit.Refit(window, up), down is null ? null : _fit.Refit(window, down));
        });
        _shifted = [.. shifted, .. (moved ?? []).Select(m => (m.Name, (Refitted?)_fit.Refit(m.Up, responses.Main), (Refitted?)_fit.Refit(m.Down, responses.Main)))];
    }

    public string Name => _estimator.Name;

    /// <summary>The fit itself.</summary>
    public FittedSpectrum Main => _fit;

    /// <summary>A function of the spectrum with its errors.</summary>
    public Quantity Quantity(Func<Refitted, double> of)
    {
        double value = of(new Refitted(_fit.Molecules, _fit.Moments));
        double statistical = Math.Sqrt(Replicas.Variance([.. _replicas.Select(of)]));
        return Fitting.Quantity.Of(value, statistical, [.. _shifted.Select(s => new BudgetLine(s.Name, Shift(s.Up, s.Down, of, value)))]);
    }

    /// <param name="signal">Where the fit is to be folded back to.</param>
    /// <param name="weak">Why mean and spread are not to be quoted; null where they are.</param>
    /// <param name="part">The window of this signal where several were fitted together; null: all of the fit.</param>
    /// <param name="from">First bin of that window in the fit.</param>
    public VelocitySpectrum ToSpectrum(NetSignal signal, string? weak, FitWindow? part = null, int from = 0)
    {
        Quantity Moment(Func<SpectrumMoments, double> of) => (_fit.Refusal ?? weak) is { } because
            ? Fitting.Quantity.NotDetermined(because) : Quantity(r => of(r.Moments));
        return new VelocitySpectrum
        {
            Estimator = _estimator.Name,
            Description = _fit.Description,
            Grid = _grid,
            Molecules = _fit.Molecules,
            Statistical = [.. Enumerable.Range(0, _grid.Cells).Select(c => Math.Sqrt(Replicas.Variance([.. _replicas.Select(r => r.Molecules[c])])))],
            Systematic = [.. Enumerable.Range(0, _grid.Cells).Select(c => Math.Sqrt(_shifted.Sum(s => Square(Shift(s.Up, s.Down, r => r.Molecules[c], _fit.Molecules[c])))))],
            Refolded = Refolded(signal, part ?? _window, from),
            Resolution = _fit.Resolution,
            Deviance = _fit.Deviance,
            DegreesOfFreedom = _fit.DegreesOfFreedom,
            Doubt = _fit.Doubt,
            Parameters = _fit.Parameters,
            Choices = _fit.Choices,
            Number = _fit.Refusal is { } refusal ? Fitting.Quantity.NotDetermined(refusal) : Quantity(r => r.Moments.Number),
            Mean = Moment(m => m.Mean),
            Spread = _fit.NoSpread is { } none ? Fitting.Quantity.NotDetermined(none) : Moment(m => m.Spread),
        };
    }

    double[] Refolded(NetSignal signal, FitWindow window, int from)
    {
        double[] refolded = [.. Enumerable.Repeat(double.NaN, signal.Axis.Bins)];
        for (int i = 0; i < window.Count; i++)
            refolded[window.First + i] = (_fit.Means[from + i] - window.Background[i]) / window.Exposure[i];
        return refolded;
    }

    /// <summary>Half the difference of both sides, with half of what they share beside it: an effect that is the same for both signs counts.</summary>
    static double Shift(Refitted? up, Refitted? down, Func<Refitted, double> of, double value)
    {
        double plus = (up is null ? down is null ? value : 2 * value - of(down.Value) : of(up.Value)) - value;
        double minus = (down is null ? 2 * value - of(up!.Value) : of(down.Value)) - value;
        double odd = 0.5 * (plus - minus), even = 0.5 * (plus + minus);
        return (odd < 0 ? -1 : 1) * double.Hypot(odd, even);
    }

    static double Square(double x) => x * x;
}
