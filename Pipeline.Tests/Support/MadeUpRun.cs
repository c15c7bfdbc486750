using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Tests.Support;

/// <summary>Binned runs made from formulas: every group holds exactly what its formula says, or Poisson draws of it.</summary>
sealed class MadeUpRun
{
    public SignalAxis Axis { get; init; } = AxisDesign.For(
        new RecordShape { Shots = 1, Samples = 4000, OriginSeconds = -1e-3, TickSeconds = 10e-6, Kind = DetectorKind.Counting }, 0.01, 20e-6);

    public double DarkRate { get; init; } = 100;
    public double ScatterRate { get; init; } = 2000;
    public double FlashCounts { get; init; } = 40;
    public double FlashTime { get; init; } = 3e-4;
    /// <summary>[bins] counts a shot from molecules; null: none.</summary>
    public double[]? Molecules { get; init; }

    /// <summary>Steady background between t1 and t2 for one shot of a kind at monitor readings of 1.</summary>
    public double Background(ShotKind kind, double from, double to)
    {
        bool lit = kind is ShotKind.Signal or ShotKind.NoAblation, fired = kind is ShotKind.Signal or ShotKind.ProbeBlocked;
        double flash = Math.Exp(-Math.Max(from, 0) / FlashTime) - Math.Exp(-Math.Max(to, 0) / FlashTime);
        return (to - from) * (DarkRate + (lit ? ScatterRate : 0)) + (fired ? FlashCounts * flash : 0);
    }

    /// <param name="shots">Of each kind.</param>
    /// <param name="blocks">Blocks they are summed in.</param>
    /// <param name="random">Poisson draws; null: expected counts.</param>
    public BinnedRun Make(int shots = 100, int blocks = 10, Random? random = null) => new()
    {
        DetectorKind = DetectorKind.Counting, Axis = Axis, ShotsRead = 4 * shots, Cuts = [],
        Groups = [.. Enum.GetValues<ShotKind>().Select(kind => Group(kind, shots, blocks, random))],
    };

    ShotGroup Group(ShotKind kind, int shots, int blocks, Random? random)
    {
        bool lit = kind is ShotKind.Signal or ShotKind.NoAblation, fired = kind is ShotKind.Signal or ShotKind.ProbeBlocked;
        double each = (double)shots / blocks;
        double Mean(int i) => each * (Background(kind, Axis.EdgeSeconds(i), Axis.EdgeSeconds(i + 1)) + (kind == ShotKind.Signal ? Molecules?[i] ?? 0 : 0));
        double[][] sums = [.. Enumerable.Range(0, blocks).Select(_ => Enumerable.Range(0, Axis.Bins).Select(i =>
            random is null ? Mean(i) : MathNet.Numerics.Distributions.Poisson.Sample(random, Mean(i))).ToArray())];
        return new ShotGroup
        {
            Condition = "off", Kind = kind, BlockSums = sums, BlockShots = [.. Enumerable.Repeat(each, blocks)],
            BlockProbeMonitor = [.. Enumerable.Repeat(lit ? each : 0, blocks)], BlockAblationMonitor = [.. Enumerable.Repeat(fired ? each : 0, blocks)],
            FullSum = new double[Axis.Edges[^1]],
        };
    }
}
