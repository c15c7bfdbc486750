using System.Globalization;
using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>How molecules travel in one condition.</summary>
public enum FlightKind
{
    Free,
    Decelerated,
    NotUnique,
}

/// <summary>Everything the analysis knows of the apparatus; plain facts, validated.</summary>
public sealed record Setup
{
    public required Species Species { get; init; }
    public required Beamline Beamline { get; init; }
    public required Probe Probe { get; init; }
    public required Detector Detector { get; init; }
    public required EmissionProfile Emission { get; init; }
    /// <summary>Share of all molecules that are in the probed level, in (0, 1]: numbers are then of all molecules; null: they are of molecules in
    /// the probed level.</summary>
    public Measured? LevelShare { get; init => field = value is { } share ? Guard.Share(share) : null; }
    /// <summary>Counts for each photon that molecules would scatter if all were in the probed level.</summary>
    public double CountsPerPhoton => Detector.Efficiency.Value * (LevelShare?.Value ?? 1);
    /// <summary>Lines of the species in the residual field at the probe: what every mode of measurement sees.</summary>
    public IReadOnlyList<SpectralLine> Lines => LinesInField.Of(Species.Lines, Probe.Field.Value);
    /// <summary>Flight by condition name.</summary>
    public required IReadOnlyDictionary<string, FlightKind> Conditions { get; init; }
    /// <summary>Capture velocity of the user's trap, m/s.</summary>
    public required double CaptureSpeed { get; init => field = Guard.Positive(value); }

    /// <summary>What a reader of the results should know.</summary>
    public IReadOnlyList<string> Remarks =>
    [
        LevelShare is { } share ? string.Create(CultureInfo.InvariantCulture, $"numbers are of all molecules, of which a share of {share} is taken to be in the probed level")
            : "numbers are of molecules in the probed level; what share of all molecules that is, is not stated",
        .. Emission.Remark is { } remark ? [remark] : Array.Empty<string>(),
    ];

    /// <summary>The flight map of a condition.</summary>
    /// <exception cref="DataFaultException">The condition is unknown, or needs a decelerator that is not described.</exception>
    public FlightMap FlightFor(string condition)
    {
        if (!Conditions.TryGetValue(condition, out FlightKind kind))
            throw new DataFaultException($"condition \"{condition}\"", "no flight stated for it",
                $"one of {string.Join(", ", Conditions.Keys)}", "add it under [conditions] in apparatus.toml");
        return kind switch
        {
            FlightKind.Free => new FreeFlight(Beamline.SourceToProbe.Value),
            FlightKind.Decelerated => Decelerated(condition),
            _ => new AmbiguousFlight(),
        };
    }

    DeceleratedFlight Decelerated(string condition)
    {
        Decelerator section = Beamline.Decelerator
            ?? throw new DataFaultException($"condition \"{condition}\"", "flight \"decelerator\" without a [decelerator] table",
                "entrance, length, stages and energy per stage", "describe the decelerator in apparatus.toml");
        double exitToProbe = Beamline.SourceToProbe.Value - section.SourceToEntrance.Value - section.Length.Value;
        if (exitToProbe < 0)
            throw new DataFaultException($"condition \"{condition}\"", $"a probe at {Beamline.SourceToProbe.Value:G4} m, before the end of the decelerator", "a probe behind it, or free flight", "compare this probe's runs in conditions with free flight only");
        return new DeceleratedFlight(section.SourceToEntrance.Value, section.Length.Value, exitToProbe, section.Stages,
            section.EnergyPerStage.Value, Species.Mass.Value);
    }
}
