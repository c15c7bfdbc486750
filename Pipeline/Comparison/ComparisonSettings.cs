namespace Pipeline.Comparison;

/// <summary>What counts as disagreement, and which differences matter to the user.</summary>
public sealed record ComparisonSettings
{
    /// <summary>Chance of a false "disagrees" over all questions of a run, in (0, 1).</summary>
    public double Level { get; init; } = 0.01;
    /// <summary>Relative difference in rate that matters.</summary>
    public double RateMatters { get; init; } = 0.20;
    /// <summary>Relative difference in arrival time, the same for all molecules, that matters.</summary>
    public double TimeMatters { get; init; } = 0.05;
    /// <summary>Relative difference in velocity, the same for all molecules, that matters.</summary>
    public double VelocityMatters { get; init; } = 0.05;
}
