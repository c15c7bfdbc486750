using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Backgrounds;

/// <summary>Bin by bin from the other kinds of shot, with no assumption on how the background runs in time.</summary>
/// <remarks>B = kappa_p (y10 - y00) + kappa_a (y01 - y00) + y00 a shot; 10 probe on without ablation, 01 ablation with the probe blocked,
/// 00 neither. kappa_p and kappa_a are the ratios of the mean monitor readings, and each is a common cause; so is, for an analog detector, the error of the
/// baselines, which is the same in every tick.</remarks>
sealed class TemplateBackground : IBackgroundModel
{
    public string Name => "templates";

    public IBackgroundFit Fit(BinnedRun run, string condition, Detector detector)
    {
        if (run.Find(condition, ShotKind.Signal) is null) throw Missing(condition, "signal");
        ShotMeans scatter = ShotMeans.Of(run, condition, ShotKind.NoAblation, detector) ?? throw Missing(condition, "no_ablation");
        ShotMeans? flash = ShotMeans.Of(run, condition, ShotKind.ProbeBlocked, detector), dark = ShotMeans.Of(run, condition, ShotKind.Dark, detector);
        var remarks = new List<string>();
        if (flash is null) remarks.Add($"{condition}: no probe-blocked shots, the ablation flash is taken as absent");
        else if (dark is null) remarks.Add($"{condition}: no dark shots, dark counts are taken as absent");
        return new TemplateFit(run, condition, detector, (scatter, flash, dark), remarks);
    }

    sealed class TemplateFit(BinnedRun run, string condition, Detector detector, (ShotMeans Scatter, ShotMeans? Flash, ShotMeans? Dark) kinds, List<string> remarks) : IBackgroundFit
    {
        public NetSignal Under(ShotGroup group)
        {
            ShotMeans signal = ShotMeans.Of(run, group, detector);
            MonitorRatio probe = MonitorRatio.Of(signal.ProbeMonitor, kinds.Scatter.ProbeMonitor, signal.Shots, kinds.Scatter.Shots, detector.ProbeMonitorNoise);
            MonitorRatio ablation = kinds.Flash is not { } flash ? MonitorRatio.One
                : MonitorRatio.Of(signal.AblationMonitor, flash.AblationMonitor, signal.Shots, flash.Shots, detector.AblationMonitorNoise);
            return Assemble(run, condition, (signal, kinds.Scatter, kinds.Flash, kinds.Dark), probe, ablation, remarks);
        }
    }

    static NetSignal Assemble(BinnedRun run, string condition, (ShotMeans Signal, ShotMeans Scatter, ShotMeans? Flash, ShotMeans? Dark) kinds,
        MonitorRatio probe, MonitorRatio ablation, List<string> remarks)
    {
        (ShotMeans signal, ShotMeans scatter, ShotMeans? flash, ShotMeans? dark) = kinds;
        int bins = run.Axis.Bins;
        var (background, variance, byProbe, byAblation) = (new double[bins], new double[bins], new double[bins], new double[bins]);
        double darkFactor = 1 - probe.Value - (flash is null ? 0 : ablation.Value);
        for (int i = 0; i < bins; i++)
        {
            double scale = signal.Shots * signal.Live[i], y00 = dark?.PerShot(i) ?? 0, y01 = flash?.PerShot(i) ?? 0;
            background[i] = scale * (probe.Value * scatter.PerShot(i) + ablation.Value * y01 + darkFactor * y00);
            variance[i] = scale * scale * (Square(probe.Value) * scatter.PerShotVariance(i)
                + Square(ablation.Value) * (flash?.PerShotVariance(i) ?? 0) + Square(darkFactor) * (dark?.PerShotVariance(i) ?? 0));
            byProbe[i] = scale * (scatter.PerShot(i) - y00) * probe.Sigma;
            byAblation[i] = flash is null ? 0 : scale * (y01 - y00) * ablation.Sigma;
        }
        double[] baselines = [signal.Baseline, probe.Value * scatter.Baseline, ablation.Value * (flash?.Baseline ?? 0), darkFactor * (dark?.Baseline ?? 0)];
        double baseline = Math.Sqrt(baselines.Sum(Square));
        return new NetSignal
        {
            Axis = run.Axis, Condition = condition, DetectorKind = run.DetectorKind, Shots = signal.Shots, Total = signal.Total,
            Live = signal.Live, Background = background, BackgroundVariance = variance,
            TotalVariance = run.DetectorKind == DetectorKind.Analog ? signal.Variance : null,
            Causes = [new("scatter scale", byProbe), new("flash scale", byAblation),
                new("baseline", [.. Enumerable.Range(0, bins).Select(i => baseline * signal.Shots * (run.Axis.Edges[i + 1] - run.Axis.Edges[i]))])],
            Remarks = [.. remarks, .. DeadTime.Remarks(condition, run.Axis, signal.Live)],
        };
    }

    static double Square(double x) => x * x;

    static DataFaultException Missing(string condition, string kind) =>
        new($"condition \"{condition}\"", $"no kept {kind} shots", "at least one", "record such shots, or use background = \"steady\"");
}

/// <summary>How much more light the signal shots had than the shots that a background is taken from.</summary>
/// <param name="Value">Ratio of mean monitor readings; 1 without monitor.</param>
/// <param name="Sigma">From the noise of the readings.</param>
readonly record struct MonitorRatio(double Value, double Sigma)
{
    public static MonitorRatio One => new(1, 0);

    public static MonitorRatio Of(double signal, double reference, double signalShots, double referenceShots, double noise)
    {
        if (!double.IsFinite(signal) || !double.IsFinite(reference) || !(reference > 0) || !(signal > 0)) return One;
        double value = signal / reference;
        return new MonitorRatio(value, value * noise * Math.Sqrt(1 / signalShots + 1 / referenceShots));
    }
}
