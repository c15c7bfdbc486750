namespace Pipeline.Predictions;

/// <summary>A change of all predicted molecules by the same factors.</summary>
/// <param name="Times">Factor on every arrival time.</param>
/// <param name="Speeds">Factor on every velocity at the probe, along the beam and across.</param>
public readonly record struct Stretch(double Times, double Speeds)
{
    /// <summary>The prediction as it is.</summary>
    public static Stretch None { get; } = new(1, 1);

    /// <summary>Molecules arrive later, as fast as before.</summary>
    public static Stretch OfTimes(double factor) => new(factor, 1);

    /// <summary>Molecules are faster on all of their way, and arrive earlier; their paths stay.</summary>
    public static Stretch OfVelocities(double factor) => new(1 / factor, factor);
}
