using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Reduction;
using Pipeline.Statistics;

namespace Pipeline.Backgrounds;

/// <summary>Scattered light and dark counts that are constant in time, and an ablation flash that decays with one or two exponentials.</summary>
/// <remarks>One Poisson fit to all shots without molecules (and to the time before the trigger) gives dark rate, scatter rate and flash
/// with their covariance, which the signal inherits as common causes. Few background shots then serve hundreds of bins, where
/// <see cref="TemplateBackground"/> would carry their noise into every one. Counting detectors only.</remarks>
sealed class SteadyBackground : IBackgroundModel
{
    /// <summary>Decrease of deviance that a second exponential must bring: 99 % of chi-square with 2 degrees of freedom.</summary>
    const double SecondMustBring = 9.21;

    public string Name => "steady";

    public IBackgroundFit Fit(BinnedRun run, string condition, Detector detector)
    {
        if (run.DetectorKind != DetectorKind.Counting)
            throw new DataFaultException("background = \"steady\"", "an analog detector", "a counting detector", "use background = \"templates\"");
        SteadyData data = SteadyData.Of(run, condition, detector);
        PoissonFit one = BestOf(data, SteadyModel.StartsWithOne(data), exponentials: 1);
        PoissonFit best = one;
        if (data.Flash is not null)
        {
            PoissonFit two = BestOf(data, SteadyModel.StartsWithTwo(one.Parameters), exponentials: 2);
            if (one.Deviance - two.Deviance > SecondMustBring) best = two;
        }
        if (!best.Converged || best.Covariance is null)
            throw new DataFaultException($"condition \"{condition}\"", "a background fit that did not converge",
                "steady scatter and dark counts and a decaying flash", "look at the shots without molecules, or use background = \"templates\"");
        return new SteadyFit(run, detector, data, best);
    }

    sealed class SteadyFit(BinnedRun run, Detector detector, SteadyData data, PoissonFit fit) : IBackgroundFit
    {
        public NetSignal Under(ShotGroup signal) => Assemble(data.WithSignal(ShotMeans.Of(run, signal, detector), detector), fit);
    }

    static PoissonFit BestOf(SteadyData data, IEnumerable<double[]> starts, int exponentials)
    {
        (double[] low, double[] high) = SteadyModel.Bounds(data, exponentials);
        return starts.Select(s => PoissonFit.Find(SteadyModel.Means(data), data.Counts, s, low, high))
            .Aggregate((a, b) => b.Deviance < a.Deviance ? b : a);
    }

    static NetSignal Assemble(SteadyData data, PoissonFit fit)
    {
        SignalAxis axis = data.Axis;
        ShotMeans signal = data.Signal;
        var background = new double[axis.Bins];
        var slopes = new double[axis.Bins * SteadyModel.Parameters];
        SteadyModel.Under(data, fit.Parameters, background, slopes);
        var causes = FactorCauses(fit, slopes, axis.Bins);
        causes.Add(new CommonCause("scatter scale", Scaled(data, fit, scatter: true)));
        causes.Add(new CommonCause("flash scale", Scaled(data, fit, scatter: false)));
        return new NetSignal
        {
            Axis = axis, Condition = data.Condition, DetectorKind = DetectorKind.Counting, Shots = signal.Shots, Total = signal.Total,
            Live = signal.Live, Background = background, BackgroundVariance = new double[axis.Bins], Causes = causes,
            Remarks = [.. data.Remarks, .. FlatnessRemark(data), .. DeadTime.Remarks(data.Condition, axis, signal.Live)],
        };
    }

    /// <summary>One cause for each column of a factor of the covariance, so that B's covariance is the sum of their outer products.</summary>
    static List<CommonCause> FactorCauses(PoissonFit fit, double[] slopes, int bins)
    {
        int p = SteadyModel.Parameters;
        int[] free = [.. Enumerable.Range(0, p).Where(k => fit.Covariance![k * p + k] > 0)];
        var covariance = MathNet.Numerics.LinearAlgebra.Matrix<double>.Build.Dense(free.Length, free.Length,
            (a, b) => fit.Covariance![free[a] * p + free[b]]);
        var factor = covariance.Cholesky().Factor;
        var causes = new List<CommonCause>();
        for (int c = 0; c < free.Length; c++)
        {
            var vector = new double[bins];
            for (int i = 0; i < bins; i++)
                for (int a = c; a < free.Length; a++) vector[i] += slopes[i * p + free[a]] * factor[a, c];
            causes.Add(new CommonCause($"background fit, {SteadyModel.Names[free[c]]}", vector));
        }
        return causes;
    }

    /// <summary>Shift of the background for one standard deviation of the ratio of monitor readings.</summary>
    static double[] Scaled(SteadyData data, PoissonFit fit, bool scatter)
    {
        double[] only = [.. fit.Parameters];
        only[SteadyModel.Dark] = 0;
        if (scatter) (only[SteadyModel.FirstFlash], only[SteadyModel.SecondFlash]) = (0, 0);
        else only[SteadyModel.Scatter] = 0;
        var part = new double[data.Axis.Bins];
        SteadyModel.Under(data, only, part, []);
        double relative = scatter ? data.ScatterScaleSigma : data.FlashScaleSigma;
        return [.. part.Select(b => b * relative)];
    }

    static IEnumerable<string> FlatnessRemark(SteadyData data)
    {
        if (data.Flatness is { } p && p < 1e-3)
            yield return string.Create(CultureInfo.InvariantCulture,
                $"{data.Condition}: the light in shots without ablation is not constant in time (p = {p:G2}); background = \"templates\" assumes less");
    }
}
