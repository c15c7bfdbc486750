using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>One line of the probed transition.</summary>
/// <param name="OffsetHz">Offset from the centroid, Hz.</param>
/// <param name="Weight">Share of the molecules, or relative strength; not negative, the list is normalised on use.</param>
public sealed record SpectralLine(double OffsetHz, double Weight)
{
    /// <summary>g m of the transition: a field B moves the line by g m mu_B B/h; null: not stated, and the line does not move.</summary>
    public double? FieldFactor { get; init; }
    /// <summary>Whether substates of g m and -g m are equally filled: a field then splits the line rather than moves it.</summary>
    public bool Mixed { get; init; }
}

/// <summary>The molecule and the transition it is probed on.</summary>
public sealed record Species
{
    public required string Name { get; init; }
    /// <summary>kg.</summary>
    public required Measured Mass { get; init => field = Guard.Positive(value); }
    /// <summary>Vacuum wavelength of the probed transition, m.</summary>
    public required Measured Wavelength { get; init => field = Guard.Positive(value); }
    /// <summary>Natural linewidth of the transition, full width at half maximum, Hz.</summary>
    public required Measured NaturalLinewidth { get; init => field = Guard.Positive(value); }
    /// <summary>Number of ground levels that share the population while the molecule is cycled.</summary>
    public int GroundLevels { get; init => field = Guard.Positive(value); } = 1;
    /// <summary>Number of excited levels that share it.</summary>
    public int ExcitedLevels { get; init => field = Guard.Positive(value); } = 1;
    /// <summary>Mean number of photons a molecule scatters before it goes dark; null: no limit.</summary>
    public Measured? PhotonLimit { get; init => field = value is { } limit ? Guard.Positive(limit) : null; }
    /// <summary>At least one line, without field; responses use <see cref="Setup.Lines"/>.</summary>
    public IReadOnlyList<SpectralLine> Lines { get; init; } = [new(0, 1)];
    /// <summary>Magnetic moment of the state that is slowed, J/T; null where it does not matter.</summary>
    public Measured? MagneticMoment { get; init; }
    /// <summary>Published source of each constant, by its key.</summary>
    public IReadOnlyDictionary<string, string> Sources { get; init; } = new Dictionary<string, string>();
}
