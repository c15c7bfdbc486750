using Pipeline.Apparatus;

namespace Pipeline.Reduction;

/// <summary>Sums over the kept shots of one condition and kind, in counts or V samples, by block of shots.</summary>
public sealed record ShotGroup
{
    public required string Condition { get; init; }
    public required ShotKind Kind { get; init; }
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

    /// <summary>The group of a condition and kind, or null.</summary>
    public ShotGroup? Find(string condition, ShotKind kind) => Groups.FirstOrDefault(g => g.Condition == condition && g.Kind == kind);
}
