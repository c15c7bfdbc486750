using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Fitting;
using Pipeline.Predictions;
using Pipeline.Response;

namespace Pipeline.Comparison;

/// <summary>Data and folded prediction of one condition in the same few bins, with every uncertainty they have. Arrays over merged bins;
/// unit: counts summed over all signal shots, as recorded.</summary>
public sealed class ComparisonCase
{
    /// <summary>Merged bins hold equal shares of the predicted signal, at least so many counts each, and are not more than this.</summary>
    const int MostBins = 30, CountsEach = 25, FewestBins = 4;

    /// <param name="outcome">The data.</param>
    /// <param name="fold">The prediction for a setup and a stretch of all arrival times.</param>
    /// <param name="setup">The apparatus.</param>
    /// <param name="fit">The window.</param>
    /// <param name="settings">What matters.</param>
    public ComparisonCase(SpectrumOutcome outcome, Func<Setup, double, FoldedPrediction> fold, Setup setup, FitSettings fit, ComparisonSettings settings)
    {
        NetSignal signal = outcome.Signal;
        (Condition, Settings, YieldScatter, YieldFreedom) = (signal.Condition, settings, outcome.YieldScatter, outcome.YieldFreedom);
        var window = new FitWindow(signal, fit.FromSeconds, fit.ToSeconds);
        Folded = fold(setup, 1);
        double[] counts = InWindow(window, Folded.Signal);
        if (!(counts.Sum() > 0))
            throw new DataFaultException($"prediction for condition \"{Condition}\"", "no counts inside the fit window", "a prediction that arrives in the window",
                "check the times and the plane of the prediction, and fit_from and fit_to in night.toml");
        int[] edges = Merge(counts);
        double[] Merged(double[] bins) => [.. edges.Skip(1).Select((to, g) => bins.AsSpan(edges[g], to - edges[g]).ToArray().Sum())];
        Total = Merged(window.Total);
        Background = Merged(window.Background);
        ExtraVariance = Merged(window.ExtraVariance);
        Overdispersed = window.TotalVariance is { } v ? Merged(v) : null;
        Predicted = Merged(counts);
        PredictedVariance = Merged([.. Enumerable.Range(0, window.Count).Select(i =>
            window.Exposure[i] * window.Exposure[i] * Folded.Variance[window.First + i])]);
        Causes = [.. window.Causes.Select(Merged)];
        double h = 0.25 * settings.TimeMatters;
        double[] later = InWindow(window, fold(setup, 1 + h).Signal), earlier = InWindow(window, fold(setup, 1 - h).Signal);
        Stretch = Merged([.. later.Zip(earlier, (a, b) => (a - b) / (2 * h))]);
        Nuisances = [.. Apparatus.Nuisances.Of(setup).Select(n => (n.Name, Merged(Moved(n))))
            .Where(n => n.Item2.Any(x => x != 0))];

        double[] Moved(Nuisance nuisance)
        {
            double[] up = InWindow(window, fold(nuisance.Shift(setup, 1), 1).Signal);
            double[] down = InWindow(window, fold(nuisance.Shift(setup, -1), 1).Signal);
            double[] odd = [.. up.Zip(down, (a, b) => 0.5 * (a - b))];
            double[] even = [.. Enumerable.Range(0, counts.Length).Select(i => 0.5 * (up[i] + down[i]) - counts[i])];
            // a probe at right angles moves the rate the same way whichever way it is turned: then the even part is what counts
            return odd.Sum(x => x * x) >= even.Sum(x => x * x) ? odd : even;
        }
    }

    public string Condition { get; }
    public ComparisonSettings Settings { get; }
    /// <summary>Relative error of the mean yield beyond counting, and its degrees of freedom.</summary>
    public double YieldScatter { get; }
    public int YieldFreedom { get; }
    public FoldedPrediction Folded { get; }
    public double[] Total { get; }
    public double[] Background { get; }
    public double[] ExtraVariance { get; }
    /// <summary>Variance of the totals where they are not Poisson counts; else null.</summary>
    public double[]? Overdispersed { get; }
    public double[] Predicted { get; }
    public double[] PredictedVariance { get; }
    /// <summary>[causes][bins] of the background.</summary>
    public double[][] Causes { get; }
    /// <summary>Change of the prediction for a relative stretch of all arrival times by one.</summary>
    public double[] Stretch { get; }
    /// <summary>Change of the prediction for one standard deviation of each nuisance.</summary>
    public IReadOnlyList<(string Name, double[] Vector)> Nuisances { get; }

    public int Bins => Total.Length;

    /// <summary>[bins] independent variance of data where the prediction is scaled by <paramref name="rate"/>.</summary>
    public double[] DataVariance(double rate) =>
        [.. Enumerable.Range(0, Bins).Select(g => (Overdispersed?[g] ?? Math.Max(rate * Predicted[g] + Background[g], 1)) + ExtraVariance[g])];

    static double[] InWindow(FitWindow window, double[] perShot) =>
        [.. Enumerable.Range(0, window.Count).Select(i => window.Exposure[i] * perShot[window.First + i])];

    /// <summary>Edges of merged bins, chosen on the prediction alone.</summary>
    static int[] Merge(double[] predicted)
    {
        double all = predicted.Sum();
        int groups = Math.Clamp((int)(all / CountsEach), FewestBins, MostBins);
        var edges = new List<int> { 0 };
        double sum = 0;
        for (int i = 0; i < predicted.Length - 1; i++)
        {
            sum += predicted[i];
            if (sum >= all * edges.Count / groups && edges.Count < groups) edges.Add(i + 1);
        }
        edges.Add(predicted.Length);
        return [.. edges];
    }
}
