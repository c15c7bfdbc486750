using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Ingest;
using Pipeline.Predictions;

namespace Pipeline.Configuration;

/// <summary>Which files are runs, and how they are read.</summary>
/// <param name="Match">File name pattern with * and ?, no folder parts.</param>
/// <param name="Mode">Mode of measurement, "arrival".</param>
/// <param name="Layout">Name of a shot file layout.</param>
public sealed record RunRule(string Match, string Mode, string Layout)
{
    /// <summary>Name of the run, {file} stands for the file's name without extension; null: that name. Rules with a name make runs of their
    /// own, so that one file can give several: one a detector.</summary>
    public string? Name { get; init; }
    /// <summary>Name of a detector beside the usual one; null: the usual one.</summary>
    public string? Detector { get; init; }
    /// <summary>Name of a probe beside the usual one; null: the usual one.</summary>
    public string? Probe { get; init; }
    /// <summary>Pattern over run names: the scan across the beam that tells the zero of the frequency axis, the last one whose name comes
    /// before this run's, else the first; null: axis_zero of the probe.</summary>
    public string? ZeroFrom { get; init; }
}

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

/// <summary>Runs that share a beam, to be fitted together.</summary>
/// <param name="Name">Name of the result, beside those of the runs.</param>
/// <param name="Runs">Patterns over run names; numbers are those of the first run by the first pattern.</param>
/// <param name="Condition">Condition whose beam is shared.</param>
/// <param name="YieldMayDiffer">Relative standard deviation of the source's yield between the runs.</param>
public sealed record JointRule(string Name, IReadOnlyList<string> Runs, string Condition, double YieldMayDiffer);

/// <summary>All that the configuration folder says, validated.</summary>
public sealed record LabConfiguration
{
    public required Setup Setup { get; init; }
    /// <summary>Detectors beside the usual one, by name.</summary>
    public IReadOnlyDictionary<string, Detector> Detectors { get; init; } = new Dictionary<string, Detector>(StringComparer.Ordinal);
    /// <summary>Probes beside the usual one, by name.</summary>
    public IReadOnlyDictionary<string, Probe> Probes { get; init; } = new Dictionary<string, Probe>(StringComparer.Ordinal);
    public required AnalysisSettings Analysis { get; init; }
    /// <summary>First match wins among the rules without a name.</summary>
    public required IReadOnlyList<RunRule> Runs { get; init; }
    public required IReadOnlyList<PredictionRule> Predictions { get; init; }
    /// <summary>Runs that are fitted together as well.</summary>
    public IReadOnlyList<JointRule> Joints { get; init; } = [];
    public required IReadOnlyDictionary<string, ShotFileLayout> ShotLayouts { get; init; }
    public required IReadOnlyDictionary<string, MoleculeFileLayout> MoleculeLayouts { get; init; }
    /// <summary>SHA-256 over names and bytes of every file that was read, hexadecimal.</summary>
    public required string Digest { get; init; }
    /// <summary>The files that were read, relative to the folder, in ordinal order.</summary>
    public required IReadOnlyList<string> Files { get; init; }

    /// <summary>The apparatus as the runs of a rule see it.</summary>
    public Setup SetupFor(RunRule rule)
    {
        Setup setup = rule.Detector is { } detector ? Setup with { Detector = Detectors[detector] } : Setup;
        if (rule.Probe is not { } name) return setup;
        Probe probe = Probes[name];
        return setup with { Probe = probe, Beamline = probe.SourceToProbe is { } distance ? setup.Beamline with { SourceToProbe = distance } : setup.Beamline };
    }
}
