using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Backgrounds;

/// <summary>One cause that moves all bins of a background together.</summary>
/// <param name="Name">As a physicist would say it.</param>
/// <param name="Vector">[bins] shift of the background in the summed signal for one standard deviation of the cause.</param>
public sealed record CommonCause(string Name, double[] Vector);

/// <summary>The summed signal of one condition with the background that stands in it. Nothing is subtracted from counts: the fits
/// compare the sum with background plus molecules. Units: counts (or photo-electron equivalents for an analog detector), summed over
/// all kept signal shots.</summary>
public sealed record NetSignal
{
    public required SignalAxis Axis { get; init; }
    public required string Condition { get; init; }
    public required DetectorKind DetectorKind { get; init; }
    /// <summary>Kept signal shots.</summary>
    public required double Shots { get; init; }
    /// <summary>[bins] as recorded.</summary>
    public required double[] Total { get; init; }
    /// <summary>[bins] share of true counts that the dead time lets through, in (0, 1].</summary>
    public required double[] Live { get; init; }
    /// <summary>[bins] expected background, as recorded (with dead time).</summary>
    public required double[] Background { get; init; }
    /// <summary>[bins] independent variance of <see cref="Background"/>.</summary>
    public required double[] BackgroundVariance { get; init; }
    /// <summary>[bins] independent variance of <see cref="Total"/> for an analog detector; null where counts are Poisson.</summary>
    public double[]? TotalVariance { get; init; }
    public required IReadOnlyList<CommonCause> Causes { get; init; }
    public IReadOnlyList<string> Remarks { get; init; } = [];

    /// <summary>[bins] molecules' signal, dead time undone, a shot. Negative values stay.</summary>
    public double[] NetPerShot() => [.. Total.Select((total, i) => (total - Background[i]) / (Live[i] * Shots))];

    /// <summary>[bins] standard error of <see cref="NetPerShot"/> from counting and from the independent part of the background.</summary>
    public double[] NetError() => [.. Total.Select((total, i) =>
        Math.Sqrt((TotalVariance?[i] ?? Math.Max(total, 1)) + BackgroundVariance[i]) / (Live[i] * Shots))];
}
