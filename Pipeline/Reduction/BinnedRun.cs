using Pipeline.Apparatus;

namespace Pipeline.Reduction;

/// <summary>Sums over the kept shots of one condition and kind, in counts or V samples, by block of shots.</summary>
public sealed record ShotGroup
{
    public required string Condition { get; init; }
    public required ShotKind Kind { get; init; }
    /// <summary>Point of a scan; -1 where nothing is scanned.</summary>
    public int Point { get; init; } = -1;
    /// <summary>Mean laser reading of the kept shots, Hz; NaN where there is none.</summary>
    public double Detuning { get; init; } = double.NaN;
    /// <summary>Mean place of the kept shots in the run: -0.5 for its first kept shot, 0.5 for its last; 0 where it has only one.</summary>
    public double Order { get; init; }
    /// <summary>[blocks][bins] sums of the samples in each bin.</summary>
    public required double[][] BlockSums { get; init; }
    /// <summary>[blocks] kept shots in each block; weights of a resampled run may be fractional.</summary>
    public required double[] BlockShots { get; init; }
    /// <summary>[blocks] summed probe monitor, zero subtracted, V; NaN where there is no monitor.</summary>
    public required double[] BlockProbeMonitor { get; init; }
    /// <summary>[blocks] summed ablation monitor, zero subtracted, V; NaN where there is no monitor.</summary>
    public required double[] BlockAblationMonitor { get; init; }
    /// <summary>[samples] sum over all kept shots at full resolution.</summary>
    public required double[] FullSum { get; init; }
    /// <summary>Analog: variance of the summed baselines that were subtracted, V^2.</summary>
    public double BaselineVariance { get; init; }

    /// <summary>Kept shots.</summary>
    public double Shots => BlockShots.Sum();
}

/// <summary>Shots cut for one reason.</summary>
/// <param name="Reason">Name of the check.</param>
/// <param name="Numbers">The shots' own numbers.</param>
public sealed record ShotCut(string Reason, IReadOnlyList<long> Numbers);

/// <summary>A run reduced to sums by condition, kind of shot and block of shots.</summary>
public sealed record BinnedRun
{
    public required DetectorKind DetectorKind { get; init; }
    /// <summary>Covers the whole record, so the sum over bins is the sum over samples.</summary>
    public required SignalAxis Axis { get; init; }
    public required IReadOnlyList<ShotGroup> Groups { get; init; }
    public required int ShotsRead { get; init; }
    public required IReadOnlyList<ShotCut> Cuts { get; init; }
    /// <summary>Remarks that go to the report, such as shots kept although they look unusual.</summary>
    public IReadOnlyList<string> Remarks { get; init; } = [];

    /// <summary>Names of the conditions, in order.</summary>
    public IReadOnlyList<string> Conditions => [.. Groups.Where(g => g.Kind == ShotKind.Signal).Select(g => g.Condition).Distinct().Order(StringComparer.Ordinal)];

    /// <summary>Signal groups of a condition, one a point, in the order of the laser reading.</summary>
    public IReadOnlyList<ShotGroup> Scan(string condition) =>
        [.. Groups.Where(g => g.Condition == condition && g.Kind == ShotKind.Signal && g.Point >= 0).OrderBy(g => g.Detuning).ThenBy(g => g.Point)];

    /// <summary>The points of a scan taken together, as if nothing had been scanned.</summary>
    public BinnedRun WithoutPoints() => this with
    {
        Groups = [.. Groups.GroupBy(g => (g.Condition, g.Kind)).Select(g => g.Count() == 1 ? g.First() with { Point = -1 } : g.First() with
        {
            Point = -1, Detuning = double.NaN, Order = 0,
            BlockSums = [.. g.SelectMany(p => p.BlockSums)], BlockShots = [.. g.SelectMany(p => p.BlockShots)], BlockProbeMonitor = [.. g.SelectMany(p => p.BlockProbeMonitor)],
            BlockAblationMonitor = [.. g.SelectMany(p => p.BlockAblationMonitor)], BaselineVariance = g.Sum(p => p.BaselineVariance),
            FullSum = [.. Enumerable.Range(0, g.First().FullSum.Length).Select(i => g.Sum(p => p.FullSum[i]))],
        })],
    };

    /// <summary>The group of a condition and kind, or null.</summary>
    public ShotGroup? Find(string condition, ShotKind kind) => Groups.FirstOrDefault(g => g.Condition == condition && g.Kind == kind);
}
