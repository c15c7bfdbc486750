using Pipeline.Analysis;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Predictions;
using Pipeline.Quantities;
using Pipeline.Reduction;

namespace Pipeline.Configuration;

/// <summary>The names that night.toml may choose from.</summary>
/// <param name="Backgrounds">Background models.</param>
/// <param name="Estimators">Spectrum estimators.</param>
/// <param name="Modes">Modes of measurement.</param>
/// <param name="ShotLayouts">Layouts of shot files.</param>
/// <param name="MoleculeLayouts">Layouts of predictions.</param>
/// <param name="Conditions">Conditions of the apparatus.</param>
/// <param name="Detectors">Detectors beside the usual one.</param>
/// <param name="Probes">Probes beside the usual one.</param>
sealed record NightChoices(
    IReadOnlyCollection<string> Backgrounds, IReadOnlyCollection<string> Estimators, IReadOnlyCollection<string> Modes,
    IReadOnlyCollection<string> ShotLayouts, IReadOnlyCollection<string> MoleculeLayouts, IReadOnlyCollection<string> Conditions,
    IReadOnlyCollection<string> Detectors, IReadOnlyCollection<string> Probes);

/// <summary>night.toml.</summary>
static class NightReader
{
    public static (AnalysisSettings Settings, IReadOnlyList<RunRule> Runs, IReadOnlyList<PredictionRule> Predictions, IReadOnlyList<JointRule> Joints) Read(TomlTable root, NightChoices choices)
    {
        AnalysisSettings settings = ReadSettings(root.Table("analysis"), root.OptionalTable("checks"), root.OptionalTable("compare"), choices);
        RunRule[] runs = [.. root.Tables("runs").Select(t => ReadRun(t, choices))];
        PredictionRule[] predictions = [.. root.Tables("predictions").Select(t => ReadPrediction(t, choices))];
        JointRule[] joints = [.. root.Tables("joint").Select(t => ReadJoint(t, choices))];
        if (runs.Length == 0) throw root.Refuse("runs", "no [[runs]]", "at least one, saying which files are runs", "add [[runs]] with match, mode and layout");
        root.RefuseUnknown();
        return (settings, runs, predictions, joints);
    }

    static AnalysisSettings ReadSettings(TomlTable a, TomlTable? checks, TomlTable? compare, NightChoices choices)
    {
        var settings = new AnalysisSettings
        {
            Reduction = ReadReduction(a, checks),
            Background = a.Choice("background", choices.Backgrounds),
            Fit = ReadFit(a, choices),
            Comparison = ReadComparison(compare),
        };
        a.RefuseUnknown();
        return settings;
    }

    static ReductionSettings ReadReduction(TomlTable a, TomlTable? checks)
    {
        var plain = new ReductionSettings();
        double relative = a.OptionalQuantity("relative_bin_width", Dimension.Fraction)?.Value ?? plain.RelativeBinWidth;
        if (relative is not (> 0 and <= 0.5)) throw a.Refuse("relative_bin_width", $"{relative:G4}", "more than 0, at most 50 %");
        double shortest = a.OptionalQuantity("shortest_bin", Dimension.Time)?.Value ?? plain.ShortestBinSeconds;
        if (!(shortest > 0)) throw a.Refuse("shortest_bin", $"{shortest:G4} s", "a positive time");
        double? unlocked = checks?.OptionalQuantity("unlocked_beyond", Dimension.Frequency)?.Value;
        if (unlocked <= 0) throw checks!.Refuse("unlocked_beyond", $"{unlocked:G4} Hz", "a positive frequency");
        var settings = new ReductionSettings
        {
            RelativeBinWidth = relative, ShortestBinSeconds = shortest, UnlockedBeyondHz = unlocked,
            ShotsPerBlock = a.Has("shots_per_block") ? a.Whole("shots_per_block", 1, 100_000) : plain.ShotsPerBlock,
            MonitorOutlierBeyond = Deviations(checks),
            ScanStepHz = a.OptionalQuantity("scan_step", Dimension.Frequency)?.Value,
            TriggerMarkWithinSeconds = checks?.OptionalQuantity("trigger_mark_within", Dimension.Time)?.Value,
            CutFlatRecords = checks is null || !checks.Has("cut_flat_records") ? plain.CutFlatRecords : checks.Flag("cut_flat_records"),
            CutSaturated = checks is null || !checks.Has("cut_saturated") ? plain.CutSaturated : checks.Flag("cut_saturated"),
        };
        checks?.RefuseUnknown();
        return settings;
    }

    static double? Deviations(TomlTable? checks)
    {
        if (checks is null || !checks.Has("monitor_outlier_beyond")) return null;
        double beyond = checks.Number("monitor_outlier_beyond");
        return beyond >= 3 ? beyond : throw checks.Refuse("monitor_outlier_beyond", $"{beyond:G4}", "3 or more standard deviations: less would cut good shots");
    }

    static FitSettings ReadFit(TomlTable a, NightChoices choices)
    {
        var (from, to, step) = (a.Quantity("velocity_from", Dimension.Speed).Value, a.Quantity("velocity_to", Dimension.Speed).Value, a.Quantity("velocity_step", Dimension.Speed).Value);
        if (!(from > 0)) throw a.Refuse("velocity_from", $"{from:G6} m/s", "a positive speed");
        if (!(to > from)) throw a.Refuse("velocity_to", $"{to:G6} m/s", $"more than velocity_from, {from:G6} m/s");
        if (!(step > 0) || (to - from) / step is not (>= 8 and <= 400)) throw a.Refuse("velocity_step", $"{step:G6} m/s", "8 to 400 cells between velocity_from and velocity_to");
        double start = a.Quantity("fit_from", Dimension.Time).Value;
        double? end = a.OptionalQuantity("fit_to", Dimension.Time)?.Value;
        if (end <= start) throw a.Refuse("fit_to", $"{end:G6} s", $"later than fit_from, {start:G6} s");
        var plain = new FitSettings { FromSeconds = start, VelocityFrom = from, VelocityTo = to, VelocityStep = step };
        double confidence = a.OptionalQuantity("confidence", Dimension.Fraction)?.Value ?? plain.Confidence;
        if (confidence is not (>= 0.5 and < 1)) throw a.Refuse("confidence", $"{confidence:G4}", "50 % or more, less than 100 %");
        return new FitSettings
        {
            FromSeconds = start, ToSeconds = end, VelocityFrom = from, VelocityTo = to, VelocityStep = step, Confidence = confidence,
            Estimator = a.Has("estimator") ? a.Choice("estimator", choices.Estimators) : plain.Estimator,
            Shape = a.Has("shape") ? a.Choice("shape", ShapeNames.All) : plain.Shape,
            ShapePower = ShapePower(a, plain),
            Replicas = a.Has("replicas") ? a.Whole("replicas", 50, 100_000) : plain.Replicas,
            Seed = a.Has("seed") ? a.Whole("seed", 0, int.MaxValue) : plain.Seed,
        };
    }

    static double ShapePower(TomlTable a, FitSettings plain)
    {
        double power = a.Has("shape_power") ? a.Number("shape_power") : plain.ShapePower;
        return power is >= 0 and <= 6 ? power : throw a.Refuse("shape_power", $"{power:G4}", "a power of v from 0 to 6: 3 for the flux of a drifting gas, 2 in another convention");
    }

    static ComparisonSettings ReadComparison(TomlTable? t)
    {
        var plain = new ComparisonSettings();
        if (t is null) return plain;
        double Share(string key, double otherwise)
        {
            double value = t.OptionalQuantity(key, Dimension.Fraction)?.Value ?? otherwise;
            return value is > 0 and < 1 ? value : throw t.Refuse(key, $"{value:G4}", "between 0 and 100 %");
        }
        var settings = new ComparisonSettings
        {
            Level = Share("level", plain.Level), RateMatters = Share("rate_matters", plain.RateMatters), TimeMatters = Share("time_matters", plain.TimeMatters),
            VelocityMatters = Share("velocity_matters", plain.VelocityMatters),
        };
        t.RefuseUnknown();
        return settings;
    }

    static RunRule ReadRun(TomlTable t, NightChoices choices)
    {
        var rule = new RunRule(t.Text("match"), t.Choice("mode", choices.Modes), t.Choice("layout", choices.ShotLayouts))
        {
            Name = t.OptionalText("name"), Detector = t.Has("detector") ? t.Choice("detector", choices.Detectors) : null,
            Probe = t.Has("probe") ? t.Choice("probe", choices.Probes) : null, ZeroFrom = t.OptionalText("zero_from"),
        };
        t.RefuseUnknown();
        if (rule.Name is { } name && (!name.Contains("{file}", StringComparison.Ordinal) || name.IndexOfAny(['/', '\\']) >= 0)) throw t.Refuse("name", $"\"{name}\"", "a name with {file} in it and without folders, such as \"{file}-side\"");
        return rule.Match.Contains('/', StringComparison.Ordinal) || rule.Match.Length == 0
            ? throw t.Refuse("match", $"\"{rule.Match}\"", "a file name pattern without folders, such as \"*.h5\"") : rule;
    }

    static JointRule ReadJoint(TomlTable t, NightChoices choices)
    {
        string name = t.Text("name");
        string[] runs = [.. t.Texts("runs")];
        string condition = t.Choice("condition", choices.Conditions);
        double differ = t.OptionalQuantity("yield_may_differ", Dimension.Fraction)?.Value ?? 0.1;
        t.RefuseUnknown();
        if (name.Length == 0 || name.IndexOfAny(['/', '\\']) >= 0) throw t.Refuse("name", $"\"{name}\"", "a name without folders");
        if (runs.Length < 2) throw t.Refuse("runs", $"{runs.Length} pattern", "two patterns over run names or more", "name the runs that share the beam");
        return differ is > 0 and <= 2 ? new JointRule(name, runs, condition, differ) : throw t.Refuse("yield_may_differ", $"{differ:G4}", "more than 0, at most 200 %");
    }

    static PredictionRule ReadPrediction(TomlTable t, NightChoices choices)
    {
        if (!t.Has("weighting"))
            throw t.Refuse("weighting", "no such key", "weighting = \"crossings\" (a row is a molecule that crosses a plane) or \"snapshot\" (molecules at one instant)",
                "declare what a row of the prediction stands for: the number depends on it");
        var rule = new PredictionRule(t.Text("runs"), t.Choice("condition", choices.Conditions), t.Text("file"), t.Choice("layout", choices.MoleculeLayouts),
            t.Choice("weighting", ("crossings", MoleculeWeighting.Crossings), ("snapshot", MoleculeWeighting.Snapshot)),
            t.Choice("normalisation", ("absolute", Normalisation.Absolute), ("relative", Normalisation.Relative)));
        t.RefuseUnknown();
        bool outside = Path.IsPathRooted(rule.File) || rule.File.Split('/', '\\').Contains("..");
        return outside ? throw t.Refuse("file", $"\"{rule.File}\"", "a path below the day's folder") : rule;
    }
}
