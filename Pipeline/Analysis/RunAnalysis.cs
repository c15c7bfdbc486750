using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Predictions;
using Pipeline.Reduction;
using Pipeline.Response;

namespace Pipeline.Analysis;

/// <summary>A prediction for one condition.</summary>
/// <param name="Molecules">Simulated molecules.</param>
/// <param name="RelativeOnly">Whether only the distribution is predicted.</param>
public sealed record ConditionPrediction(MoleculeList Molecules, bool RelativeOnly);

/// <summary>The pipeline on one page.</summary>
public static class RunAnalysis
{
    /// <summary>Numerical behaviour of the program: raised whenever the same input may give other numbers.</summary>
    public const int NumericalVersion = 3;

    /// <summary>Names of all modes of measurement.</summary>
    public static IReadOnlyList<string> Modes { get; } = [.. ResponseModes.All.Select(m => m.Name), TransverseFitter.Mode];

    /// <summary>Whether a mode scans the laser.</summary>
    public static bool IsScan(string mode) => mode == TransverseFitter.Mode || ResponseModes.Named(mode).Scanned != Scanned.Nothing;

    /// <summary>Spectra and numbers of every condition.</summary>
    public static IReadOnlyList<SpectrumOutcome> Fit(BinnedRun run, string mode, Setup setup, AnalysisSettings settings)
    {
        if (run.Conditions.Count == 0)
            throw new DataFaultException("run", "no kept signal shots", "at least one shot with probe and ablation on",
                "look at the shots that were cut, and at the labels of the layout");
        IBackgroundModel background = BackgroundModels.Named(settings.Background);
        return ConditionRatios.Add([.. run.Conditions.Select(condition => mode == TransverseFitter.Mode ? TransverseFitter.Fit(run, condition, setup, background, settings.Fit)
            : SpectrumFitter.Fit(run, condition, setup, background, ResponseModes.Named(mode), settings.Fit))], setup);
    }

    /// <summary>Name of the mode of runs that are fitted together.</summary>
    public const string Joint = "joint";

    /// <summary>One spectrum from several runs.</summary>
    public static IReadOnlyList<SpectrumOutcome> FitTogether(IReadOnlyList<JointMember> members, AnalysisSettings settings, double yieldMayDiffer)
    {
        foreach (JointMember member in members)
        {
            if (member.Mode == TransverseFitter.Mode)
                throw new DataFaultException(member.Name, "a scan across the beam in a joint fit", "runs that tell velocities", "name it in zero_from of the Doppler scans instead");
            if (!member.Run.Conditions.Contains(member.Condition, StringComparer.Ordinal))
                throw new DataFaultException(member.Name, $"no kept signal shots of condition \"{member.Condition}\"", $"one of {string.Join(", ", member.Run.Conditions)}", "correct the condition of [[joint]] in night.toml");
        }
        return JointFitter.Fit(members, BackgroundModels.Named(settings.Background), settings.Fit, yieldMayDiffer);
    }

    /// <summary>Folded predictions, and the verdict on the run.</summary>
    public static (IReadOnlyList<ConditionOutcome> Conditions, Verdict Verdict) Compare(
        IReadOnlyList<SpectrumOutcome> fits, IReadOnlyDictionary<string, ConditionPrediction> predictions, Setup setup, AnalysisSettings settings)
    {
        var conditions = new List<ConditionOutcome>();
        var answers = new List<Answer>();
        foreach (SpectrumOutcome fit in fits)
        {
            if (!predictions.TryGetValue(fit.Signal.Condition, out ConditionPrediction? prediction))
            {
                conditions.Add(new ConditionOutcome(fit, null, false));
                continue;
            }
            var both = new ComparisonCase(fit, Folding(prediction, fit, settings), setup, settings.Fit, settings.Comparison);
            conditions.Add(new ConditionOutcome(fit, both.Folded, prediction.RelativeOnly));
            answers.AddRange(Questions.All.Where(q => q.Concerns(both) && !(q.NeedsAbsolute && prediction.RelativeOnly)).Select(q => q.Ask(both)));
        }
        bool across = fits.Any(f => f.Others.Any(o => o.Name == TransverseFitter.FrequencyZero));
        return (conditions, Judge.Decide(answers, settings.Comparison.Level, across ? "a scan across the beam is not compared: it finds the zero of the frequency axis" : "no prediction belongs to this run"));
    }

    static PredictionFold Folding(ConditionPrediction prediction, SpectrumOutcome fit, AnalysisSettings settings) =>
        new(prediction.Molecules, fit.Signal.Axis, new VelocityGrid(settings.Fit.VelocityFrom, settings.Fit.VelocityTo, settings.Fit.VelocityStep));
}
