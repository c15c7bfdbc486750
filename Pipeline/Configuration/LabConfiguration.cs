using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Ingest;
using Pipeline.Predictions;

namespace Pipeline.Configuration;

/// <summary>Which files are runs, and how they are read.</summary>
/// <param name="Match">File name pattern with * and ?, no folder parts.</param>
/// <param name="Mode">Mode of measurement, "arrival".</param>
/// <param name="Layout">Name of a shot file layout.</param>
public sealed record RunRule(string Match, string Mode, string Layout);

/// <summary>Whether a prediction states how many molecules arrive, or only their distribution.</summary>
public enum Normalisation
{
    Absolute,
    Relative,
}

/// <summary>Which prediction belongs to which runs.</summary>
/// <param name="Runs">Pattern over run names.</param>
/// <param name="Condition">Condition it predicts.</param>
/// <param name="File">File, relative to the day's folder.</param>
/// <param name="Layout">Name of a molecule file layout.</param>
/// <param name="Weighting">What a row stands for.</param>
/// <param name="Normalisation">Absolute or relative.</param>
public sealed record PredictionRule(
    string Runs, string Condition, string File, string Layout, MoleculeWeighting Weighting, Normalisation Normalisation);

/// <summary>All that the configuration folder says, validated.</summary>
public sealed record LabConfiguration
{
    public required Setup Setup { get; init; }
    public required AnalysisSettings Analysis { get; init; }
    /// <summary>First match wins.</summary>
    public required IReadOnlyList<RunRule> Runs { get; init; }
    public required IReadOnlyList<PredictionRule> Predictions { get; init; }
    public required IReadOnlyDictionary<string, ShotFileLayout> ShotLayouts { get; init; }
    public required IReadOnlyDictionary<string, MoleculeFileLayout> MoleculeLayouts { get; init; }
    /// <summary>SHA-256 over names and bytes of every file that was read, hexadecimal.</summary>
    public required string Digest { get; init; }
    /// <summary>The files that were read, relative to the folder, in ordinal order.</summary>
    public required IReadOnlyList<string> Files { get; init; }
}
