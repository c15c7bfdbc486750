namespace Pipeline.Fitting;

/// <summary>Names of the estimators, for the configuration.</summary>
public static class SpectrumEstimatorNames
{
    public static IReadOnlyList<string> All { get; } = [.. SpectrumEstimators.All.Select(e => e.Name)];
}
