using Pipeline.Apparatus;
using Pipeline.Numerics;
using Pipeline.Reduction;

namespace Pipeline.Backgrounds;

/// <summary>The totals of one kind of shot, in counts or photo-electron equivalents.</summary>
sealed record ShotMeans
{
    public required double Shots { get; init; }
    /// <summary>[bins] summed over shots, as recorded.</summary>
    public required double[] Total { get; init; }
    /// <summary>[bins] share that the dead time lets through.</summary>
    public required double[] Live { get; init; }
    /// <summary>[bins] variance of <see cref="Total"/>, from Poisson counts or from the scatter of blocks.</summary>
    public required double[] Variance { get; init; }
    /// <summary>Standard error of the mean baseline of a shot, in photo-electrons a tick; 0 for counts.</summary>
    public required double Baseline { get; init; }
    /// <summary>Mean reading above zero, V; NaN without monitor.</summary>
    public required double ProbeMonitor { get; init; }
    public required double AblationMonitor { get; init; }

    /// <summary>[bins] true counts a shot.</summary>
    public double PerShot(int bin) => Total[bin] / (Live[bin] * Shots);

    /// <summary>[bins] variance of <see cref="PerShot"/>.</summary>
    public double PerShotVariance(int bin) => Variance[bin] / (Live[bin] * Shots * Live[bin] * Shots);

    public static ShotMeans? Of(BinnedRun run, string condition, ShotKind kind, Detector detector) =>
        run.Find(condition, kind) is { } group && group.Shots > 0 ? Of(run, group, detector) : null;

    public static ShotMeans Of(BinnedRun run, ShotGroup group, Detector detector)
    {
        bool counting = run.DetectorKind == DetectorKind.Counting;
        double unit = counting ? 1 : run.Axis.TickSeconds / detector.VoltSecondPerElectron!.Value.Value;
        double[] total = [.. Enumerable.Range(0, run.Axis.Bins).Select(i => unit * group.BlockSums.Sum(b => b[i]))];
        return new ShotMeans
        {
            Shots = group.Shots,
            Total = total,
            Live = counting ? DeadTime.Live(group, run.Axis, detector.DeadTime.Value, detector.DeadTimeKind) : [.. total.Select(_ => 1.0)],
            Variance = counting ? PoissonVariance(total, run.Axis) : BlockScatter(group, unit),
            Baseline = counting ? 0 : unit * Math.Sqrt(group.BaselineVariance) / group.Shots,
            ProbeMonitor = group.BlockProbeMonitor.Sum() / group.Shots,
            AblationMonitor = group.BlockAblationMonitor.Sum() / group.Shots,
        };
    }

    /// <summary>Of few counts: from the mean rate of the neighbourhood, so that an empty bin is not taken as exactly empty, and a bin that
    /// fluctuates up does not lose weight for it.</summary>
    static double[] PoissonVariance(double[] total, SignalAxis axis)
    {
        const int Half = 10;
        double[] width = [.. Enumerable.Range(0, axis.Bins).Select(axis.WidthSeconds)];
        double[] counts = LocalMean.Of(total, Half), seconds = LocalMean.Of(width, Half);
        return [.. width.Select((w, i) => w * Math.Max(counts[i], 1.0 / (2 * Half + 1)) / seconds[i])];
    }

    /// <summary>Variance of the summed bins from the scatter of blocks about the mean record, scaled to each block: what all bins share, the
    /// yield of the source, is no independent variance.</summary>
    static double[] BlockScatter(ShotGroup group, double unit)
    {
        int blocks = group.BlockShots.Length;
        double[] mean = [.. Enumerable.Range(0, group.BlockSums[0].Length).Select(i => group.BlockSums.Sum(b => b[i]) / group.Shots)];
        double norm = mean.Sum(m => m * m);
        double[] yield = [.. group.BlockSums.Select(b => norm > 0 ? b.Zip(mean, (x, m) => x * m).Sum() / norm : 0)];
        return [.. Enumerable.Range(0, mean.Length).Select(i =>
        {
            double squares = Enumerable.Range(0, blocks).Sum(b => Square(group.BlockSums[b][i] - mean[i] * yield[b]));
            return blocks > 1 ? unit * unit * squares * blocks / (blocks - 1) : double.PositiveInfinity;
        })];
    }

    static double Square(double x) => x * x;
}
