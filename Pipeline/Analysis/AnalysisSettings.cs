using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Reduction;

namespace Pipeline.Analysis;

/// <summary>Every choice of the analysis that is not a fact of the apparatus.</summary>
public sealed record AnalysisSettings
{
    public required ReductionSettings Reduction { get; init; }
    /// <summary>Name of a background model.</summary>
    public required string Background { get; init; }
    public required FitSettings Fit { get; init; }
    public required ComparisonSettings Comparison { get; init; }
}
