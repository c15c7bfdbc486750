using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Predictions;
using Pipeline.Reduction;

namespace Pipeline.Analysis;

/// <summary>One condition of a run, with what was predicted for it.</summary>
/// <param name="Fit">Signal, spectra and numbers.</param>
/// <param name="Prediction">Folded prediction; null where there is none.</param>
/// <param name="RelativeOnly">Whether the prediction states a distribution but no number.</param>
public sealed record ConditionOutcome(SpectrumOutcome Fit, FoldedPrediction? Prediction, bool RelativeOnly)
{
    public string Name => Fit.Signal.Condition;
}

/// <summary>What became of the shots of a run.</summary>
/// <param name="Read">Shots in the file.</param>
/// <param name="Cuts">Shots cut, by reason.</param>
/// <param name="Kept">Shots kept, by condition and kind.</param>
public sealed record ShotTally(int Read, IReadOnlyList<ShotCut> Cuts, IReadOnlyList<KeptShots> Kept)
{
    public static ShotTally Of(BinnedRun run) =>
        new(run.ShotsRead, run.Cuts, [.. run.Groups.GroupBy(g => (g.Condition, g.Kind)).Select(g => new KeptShots(g.Key.Condition, g.Key.Kind, (int)g.Sum(p => p.Shots)))]);
}

/// <summary>Number of shots kept of one condition and kind.</summary>
/// <param name="Condition">Name of the condition.</param>
/// <param name="Kind">Kind of shot.</param>
/// <param name="Shots">Number kept.</param>
public sealed record KeptShots(string Condition, ShotKind Kind, int Shots);

/// <summary>Everything the analysis says of a run.</summary>
public sealed record RunOutcome
{
    public required string Name { get; init; }
    /// <summary>Mode of measurement.</summary>
    public required string Mode { get; init; }
    public required ShotTally Tally { get; init; }
    public required IReadOnlyList<ConditionOutcome> Conditions { get; init; }
    public required Verdict Verdict { get; init; }
    public required IReadOnlyList<string> Remarks { get; init; }
    public required Provenance Provenance { get; init; }
}

/// <summary>From what, and with what, a result was made. Nothing in it depends on the place or time of the analysis.</summary>
public sealed record Provenance
{
    /// <summary>File name and SHA-256 of every input of the run.</summary>
    public required IReadOnlyList<InputFile> Inputs { get; init; }
    /// <summary>File name and SHA-256 of every prediction used.</summary>
    public required IReadOnlyList<InputFile> Predictions { get; init; }
    /// <summary>SHA-256 over the configuration.</summary>
    public required string Configuration { get; init; }
    /// <summary>Version of the program, and number of its numerical behaviour.</summary>
    public required string Program { get; init; }
    public required int NumericalVersion { get; init; }
    public required int Seed { get; init; }
    /// <summary>Which library read the files.</summary>
    public required string Reader { get; init; }
}

/// <summary>A file by name and content.</summary>
/// <param name="Name">Path relative to the day's folder.</param>
/// <param name="Sha256">Hexadecimal.</param>
public sealed record InputFile(string Name, string Sha256);

/// <summary>A file that could not be analysed.</summary>
/// <param name="Name">Name of the run.</param>
/// <param name="Fault">What is wrong with it.</param>
public sealed record FailedRun(string Name, Fault Fault);

/// <summary>A night: every run of a day, and what could not be analysed.</summary>
/// <param name="Day">Name of the day's folder.</param>
/// <param name="Runs">In order of name.</param>
/// <param name="Failed">In order of name.</param>
/// <param name="NotRuns">Files that no rule calls a run or a prediction.</param>
public sealed record NightOutcome(string Day, IReadOnlyList<RunOutcome> Runs, IReadOnlyList<FailedRun> Failed, IReadOnlyList<string> NotRuns)
{
    /// <summary>Fits of several runs together, in the order of their rules; they are compared with nothing and have no verdict.</summary>
    public IReadOnlyList<RunOutcome> Joints { get; init; } = [];
}
