using Pipeline.Apparatus;
using Pipeline.Reduction;
using Pipeline.Statistics;

namespace Pipeline.Backgrounds;

/// <summary>A stretch of time in one kind of shot.</summary>
/// <param name="DarkExposure">Live seconds, summed over shots.</param>
/// <param name="ScatterExposure">The same times the mean probe monitor; 0 with the probe blocked.</param>
/// <param name="FlashExposure">Live shots times the mean ablation monitor; 0 without ablation.</param>
/// <param name="From">s after the trigger.</param>
/// <param name="To">s after the trigger.</param>
readonly record struct SteadyCell(double DarkExposure, double ScatterExposure, double FlashExposure, double From, double To);

/// <summary>What <see cref="SteadyBackground"/> fits: counts in stretches of time without molecules.</summary>
sealed class SteadyData
{
    readonly List<SteadyCell> _cells = [];
    readonly List<double> _counts = [];
    double? _scatterShots;

    SteadyData(SignalAxis axis, string condition, ShotMeans signal) => (Axis, Condition, Signal) = (axis, condition, signal);

    public SignalAxis Axis { get; }
    public string Condition { get; }
    public ShotMeans Signal { get; }
    public ShotMeans? Flash { get; private init; }
    /// <summary>Whether any shots were taken with the probe blocked; else dark counts are part of the scatter.</summary>
    public bool SeparatesDark { get; private init; }
    /// <summary>Mean monitors of the signal shots; 1 without monitor.</summary>
    public double SignalProbe { get; private init; }
    public double SignalAblation { get; private init; }
    public double ScatterScaleSigma { get; private init; }
    public double FlashScaleSigma { get; private init; }
    /// <summary>p-value of the shots without ablation being constant in time; null without such shots.</summary>
    public double? Flatness { get; private set; }
    public List<string> Remarks { get; private init; } = [];
    public IReadOnlyList<SteadyCell> Cells => _cells;
    public double[] Counts => [.. _counts];

    public static SteadyData Of(BinnedRun run, string condition, Detector detector)
    {
        ShotMeans signal = ShotMeans.Of(run, condition, ShotKind.Signal, detector)
            ?? throw new DataFaultException($"condition \"{condition}\"", "no kept signal shots", "at least one", "look at the shots that were cut");
        ShotMeans? scatter = ShotMeans.Of(run, condition, ShotKind.NoAblation, detector);
        ShotMeans? flash = ShotMeans.Of(run, condition, ShotKind.ProbeBlocked, detector);
        ShotMeans? dark = ShotMeans.Of(run, condition, ShotKind.Dark, detector);
        var data = new SteadyData(run.Axis, condition, signal)
        {
            Flash = flash,
            _scatterShots = scatter?.Shots,
            SeparatesDark = flash is not null || dark is not null,
            SignalProbe = Monitor(signal.ProbeMonitor),
            SignalAblation = Monitor(signal.AblationMonitor),
            ScatterScaleSigma = scatter is null ? 0 : detector.ProbeMonitorNoise * Math.Sqrt(1 / signal.Shots + 1 / scatter.Shots),
            FlashScaleSigma = flash is null ? 0 : detector.AblationMonitorNoise * Math.Sqrt(1 / signal.Shots + 1 / flash.Shots),
        };
        data.AddConstant(dark, 0);
        data.AddConstant(scatter, Monitor(scatter?.ProbeMonitor ?? double.NaN));
        data.AddBeforeTrigger();
        data.AddFlash();
        data.CheckFlatness(scatter);
        if (!data._cells.Any(c => c.ScatterExposure > 0))
            throw new DataFaultException($"condition \"{condition}\"", "no shots without ablation and no time before the trigger",
                "one of them, for the scattered light", "record shots without ablation");
        if (!data.SeparatesDark)
            data.Remarks.Add($"{condition}: no shots with the probe blocked, dark counts are scaled with the probe monitor like scattered light");
        if (flash is null) data.Remarks.Add($"{condition}: no probe-blocked shots, the ablation flash is taken as absent");
        return data;
    }

    /// <summary>The same background under other signal shots of the condition.</summary>
    public SteadyData WithSignal(ShotMeans signal, Detector detector) => new(Axis, Condition, signal)
    {
        Flash = Flash, SeparatesDark = SeparatesDark, SignalProbe = Monitor(signal.ProbeMonitor), SignalAblation = Monitor(signal.AblationMonitor), _scatterShots = _scatterShots,
        ScatterScaleSigma = _scatterShots is { } lit ? detector.ProbeMonitorNoise * Math.Sqrt(1 / signal.Shots + 1 / lit) : 0,
        FlashScaleSigma = Flash is null ? 0 : detector.AblationMonitorNoise * Math.Sqrt(1 / signal.Shots + 1 / Flash.Shots), Flatness = Flatness, Remarks = Remarks,
    };

    /// <summary>Starting dark and scatter rates.</summary>
    public (double Dark, double Scatter) StartRates()
    {
        SteadyCell[] lit = [.. _cells.Where(c => c.ScatterExposure > 0)];
        double rate = lit.Length == 0 ? 0 : _counts[_cells.IndexOf(lit[0])] / lit[0].ScatterExposure;
        return (0.1 * rate + 1e-3, 0.9 * rate + 1e-3);
    }

    /// <summary>Counts above the late level in the probe-blocked shots, for one monitor unit.</summary>
    public double FlashCounts() => Flash is null ? 0
        : Math.Max(1e-3, Flash.Total.Take(Axis.Bins / 2).Sum() / (Flash.Shots * Monitor(Flash.AblationMonitor)));

    static double Monitor(double reading) => double.IsFinite(reading) && reading > 0 ? reading : 1;

    void AddConstant(ShotMeans? kind, double probe)
    {
        if (kind is null) return;
        // in stretches, so that there are more counts than parameters where no other kind of shot was recorded
        const int Stretches = 8;
        for (int s = 0; s < Stretches; s++)
        {
            int from = s * Axis.Bins / Stretches, to = (s + 1) * Axis.Bins / Stretches;
            if (to == from) continue;
            double exposure = Enumerable.Range(from, to - from).Sum(i => kind.Shots * kind.Live[i] * Axis.WidthSeconds(i));
            Add(new SteadyCell(exposure, exposure * probe, 0, Axis.EdgeSeconds(from), Axis.EdgeSeconds(to)), kind.Total.AsSpan(from, to - from).ToArray().Sum());
        }
    }

    /// <summary>Signal shots before the trigger hold scatter and dark counts only.</summary>
    void AddBeforeTrigger()
    {
        int[] bins = [.. Enumerable.Range(0, Axis.Bins).Where(i => Axis.EdgeSeconds(i + 1) <= 1e-12)];
        if (bins.Length == 0) return;
        double exposure = bins.Sum(i => Signal.Shots * Signal.Live[i] * Axis.WidthSeconds(i));
        Add(new SteadyCell(exposure, exposure * SignalProbe, 0, Axis.EdgeSeconds(0), 0), bins.Sum(i => Signal.Total[i]));
    }

    /// <summary>Probe-blocked shots in stretches that widen with time.</summary>
    void AddFlash()
    {
        if (Flash is null) return;
        for (int from = 0, to; from < Axis.Bins; from = to)
        {
            to = from + 1;
            double start = Axis.EdgeSeconds(from);
            while (to < Axis.Bins && (start < -1e-12 ? Axis.EdgeSeconds(to + 1) <= 1e-12 : Axis.EdgeSeconds(to + 1) <= 1.1 * start)) to++;
            double live = Enumerable.Range(from, to - from).Sum(i => Flash.Live[i] * Axis.WidthSeconds(i));
            double share = live / (Axis.EdgeSeconds(to) - start);
            Add(new SteadyCell(Flash.Shots * live, 0, Flash.Shots * share * Monitor(Flash.AblationMonitor), start, Axis.EdgeSeconds(to)),
                Flash.Total.AsSpan(from, to - from).ToArray().Sum());
        }
    }

    void Add(SteadyCell cell, double counts)
    {
        _cells.Add(cell);
        _counts.Add(counts);
    }

    /// <summary>Compares twenty equal stretches of the shots without ablation with their mean.</summary>
    void CheckFlatness(ShotMeans? scatter)
    {
        if (scatter is null) return;
        double total = scatter.Total.Sum(), seconds = Axis.EdgeSeconds(Axis.Bins) - Axis.EdgeSeconds(0), deviance = 0;
        const int Stretches = 20;
        if (total < 10 * Stretches) return;
        for (int s = 0, bin = 0; s < Stretches; s++)
        {
            (double counts, double width) = (0, 0);
            for (; bin < Axis.Bins && Axis.CentreSeconds(bin) <= Axis.EdgeSeconds(0) + (s + 1) * seconds / Stretches; bin++)
                (counts, width) = (counts + scatter.Total[bin] / scatter.Live[bin], width + Axis.WidthSeconds(bin));
            if (width > 0) deviance += PoissonDeviance.Of(counts, total * width / seconds);
        }
        Flatness = MathNet.Numerics.SpecialFunctions.GammaUpperRegularized(0.5 * (Stretches - 1), 0.5 * deviance);
    }
}
