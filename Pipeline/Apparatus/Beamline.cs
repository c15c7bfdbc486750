using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>Distances and timing.</summary>
public sealed record Beamline
{
    /// <summary>Emission point to the middle of the probe, m.</summary>
    public required Measured SourceToProbe { get; init => field = Guard.Positive(value); }
    /// <summary>Added to a recorded time it gives the time after the ablation pulse, s.</summary>
    public Measured TriggerOffset { get; init; }
    /// <summary>Half width of the acceptance at the probe, horizontal, m; null: not limited.</summary>
    public double? AcceptanceHalfWidthX { get; init => field = value is { } a ? Guard.Positive(a) : null; }
    /// <summary>Half width of the acceptance at the probe, vertical, m; null: not limited.</summary>
    public double? AcceptanceHalfWidthY { get; init => field = value is { } a ? Guard.Positive(a) : null; }
    /// <summary>Null where there is no decelerator.</summary>
    public Decelerator? Decelerator { get; init; }
}

/// <summary>A section that removes the same kinetic energy at each of its stages.</summary>
public sealed record Decelerator
{
    /// <summary>Emission point to the first stage, m.</summary>
    public required Measured SourceToEntrance { get; init => field = Guard.NotNegative(value); }
    /// <summary>First stage to exit, m.</summary>
    public required Measured Length { get; init => field = Guard.Positive(value); }
    public required int Stages { get; init => field = Guard.Positive(value); }
    /// <summary>Kinetic energy removed at each stage, J.</summary>
    public required Measured EnergyPerStage { get; init => field = Guard.NotNegative(value); }
    /// <summary>Largest field on the axis of a stage, T; null where it is not stated.</summary>
    public Measured? PeakField { get; init => field = value is { } b ? Guard.Positive(b) : null; }
}
