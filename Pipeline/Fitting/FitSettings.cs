namespace Pipeline.Fitting;

/// <summary>How spectra are fitted.</summary>
public sealed record FitSettings
{
    /// <summary>Start of the fit window, s after the trigger.</summary>
    public required double FromSeconds { get; init; }
    /// <summary>End of the fit window, s after the trigger; null: to the end of the record.</summary>
    public double? ToSeconds { get; init; }
    /// <summary>Velocity grid, m/s.</summary>
    public required double VelocityFrom { get; init; }
    public required double VelocityTo { get; init; }
    public required double VelocityStep { get; init; }
    /// <summary>Name of the estimator whose numbers are quoted.</summary>
    public string Estimator { get; init; } = "unfolded";
    /// <summary>Family of the shape estimator, or "best".</summary>
    public string Shape { get; init; } = UsualShape;
    /// <summary>Power of v in its beams: 3 for the flux of a drifting gas.</summary>
    public double ShapePower { get; init; } = UsualShapePower;
    /// <summary>Bootstrap replicas over blocks of shots.</summary>
    public int Replicas { get; init; } = 200;
    /// <summary>Confidence of the interval for the number below capture, in (0, 1).</summary>
    public double Confidence { get; init; } = 0.90;
    /// <summary>Seed of the resampling; the run's content is mixed in.</summary>
    public int Seed { get; init; } = 1;

    internal const string UsualShape = "supersonic";
    internal const double UsualShapePower = 3;
}
