using MathNet.Numerics.LinearAlgebra;
using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Fitting;
using Pipeline.Predictions;

namespace Pipeline.Comparison;

/// <summary>Data and folded prediction of one condition in the same few bins, with every uncertainty they have. Arrays over merged bins;
/// unit: counts summed over all signal shots, as recorded.</summary>
public sealed class ComparisonCase
{
    /// <param name="outcome">The data.</param>
    /// <param name="fold">The prediction in the bins of the data.</param>
    /// <param name="setup">The apparatus.</param>
    /// <param name="fit">The window.</param>
    /// <param name="settings">What matters.</param>
    public ComparisonCase(SpectrumOutcome outcome, PredictionFold fold, Setup setup, FitSettings fit, ComparisonSettings settings)
    {
        NetSignal signal = outcome.Signal;
        (Condition, Settings, YieldScatter, YieldFreedom) = (signal.Condition, settings, outcome.YieldScatter, outcome.YieldFreedom);
        Scanned = signal.Axis.Points.Count > 0;
        var window = new FitWindow(signal, fit.FromSeconds, fit.ToSeconds);
        Folded = fold.Fold(setup);
        double[] counts = InWindow(window, Folded.Signal);
        if (!(counts.Sum() > 0))
            throw new DataFaultException($"prediction for condition \"{Condition}\"", "no counts inside the fit window", "a prediction that arrives in the window",
                "check the times and the plane of the prediction, and fit_from and fit_to in night.toml");
        int timeBins = Scanned ? signal.Axis.TimeBins : 1;
        int[] groups = MergedBins.Of(counts, timeBins);
        double[] Merged(IReadOnlyList<double> bins)
        {
            var sums = new double[groups.Max() + 1];
            for (int i = 0; i < bins.Count; i++) sums[groups[i]] += bins[i];
            return sums;
        }
        Total = Merged(window.Total);
        Background = Merged(window.Background);
        ExtraVariance = Merged(window.ExtraVariance);
        Overdispersed = window.TotalVariance is { } v ? Merged(v) : null;
        Predicted = Merged(counts);
        SimulationCovariance = Simulation(fold, setup, window, groups, signal.Axis.Bins);
        Causes = [.. window.Causes.Select(Merged)];
        YieldCauses = Scanned ? [.. PointYields.Of(window, Folded.Signal, timeBins, PointYields.Scatter(outcome, Folded.Signal, timeBins, setup.Detector)).Select(Merged)] : [];
        double h = 0.25 * StretchMatters;
        double[] more = Stretched(1 + h), less = Stretched(1 - h);
        Stretch = Merged([.. more.Zip(less, (a, b) => (a - b) / (2 * h))]);
        Nuisances = new MovedPredictions(setup, counts, s => InWindow(window, fold.Fold(s).Signal)).All(Merged);

        double[] Stretched(double by) => InWindow(window, fold.Fold(setup, Scanned ? Predictions.Stretch.OfVelocities(by) : Predictions.Stretch.OfTimes(by)).Signal);
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
    /// <summary>[bins, bins] of <see cref="Predicted"/>, from the finite number of simulated molecules.</summary>
    public Matrix<double> SimulationCovariance { get; }
    /// <summary>[causes][bins] of the background.</summary>
    public double[][] Causes { get; }
    /// <summary>[points][bins] of a scan: what the scatter of the yield between shots moves at each point, apart from all others, where the rate is as
    /// predicted. Empty elsewhere, for all arrival times of a shot move together.</summary>
    public double[][] YieldCauses { get; }
    /// <summary>Whether the laser was scanned.</summary>
    public bool Scanned { get; }
    /// <summary>Change of the prediction for a relative stretch by one: of all velocities in a scan, else of all arrival times.</summary>
    public double[] Stretch { get; }
    /// <summary>Change of the prediction for one standard deviation of each nuisance.</summary>
    public IReadOnlyList<(string Name, double[] Vector)> Nuisances { get; }

    /// <summary>Relative <see cref="Stretch"/> that matters.</summary>
    public double StretchMatters => Scanned ? Settings.VelocityMatters : Settings.TimeMatters;

    public int Bins => Total.Length;

    /// <summary>[bins] independent variance of data where the prediction is scaled by <paramref name="rate"/>.</summary>
    public double[] DataVariance(double rate) =>
        [.. Enumerable.Range(0, Bins).Select(g => (Overdispersed?[g] ?? Math.Max(rate * Predicted[g] + Background[g], 1)) + ExtraVariance[g])];

    /// <summary>Covariance of data where the prediction is scaled by <paramref name="rate"/>, apart from what moves the whole run alike.</summary>
    public Matrix<double> DataCovariance(double rate) =>
        Covariances.Of(DataVariance(rate), [.. Causes, .. YieldCauses.Select(c => c.Select(x => rate * x).ToArray())]);

    static double[] InWindow(FitWindow window, double[] perShot) =>
        [.. Enumerable.Range(0, window.Count).Select(i => window.Exposure[i] * perShot[window.First + i])];

    static Matrix<double> Simulation(PredictionFold fold, Setup setup, FitWindow window, int[] groups, int bins)
    {
        int[] all = [.. Enumerable.Repeat(-1, bins)];
        var exposure = new double[bins];
        groups.CopyTo(all, window.First);
        window.Exposure.CopyTo(exposure, window.First);
        return Matrix<double>.Build.DenseOfArray(fold.Covariance(setup, all, exposure));
    }
}
