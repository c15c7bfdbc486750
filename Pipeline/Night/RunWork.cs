using System.IO.Enumeration;
using System.Security.Cryptography;
using System.Text;
using Pipeline.Analysis;
using Pipeline.Configuration;
using Pipeline.Fitting;
using Pipeline.Ingest;
using Pipeline.Predictions;
using Pipeline.Reduction;
using Pipeline.Reports;
using Pipeline.Results;

namespace Pipeline.Night;

/// <summary>The stages of one run, each of which reuses what an earlier one left if it was made from the same input, configuration and
/// program.</summary>
public sealed class RunWork
{
    const double ManyCuts = 0.02;
    static readonly System.Collections.Concurrent.ConcurrentDictionary<string, Lock> Locks = new(StringComparer.Ordinal);
    readonly LabConfiguration _lab;
    readonly Apparatus.Setup _setup;
    readonly AnalysisSettings _settings;
    readonly InputFile[] _zeroInputs = [];
    readonly DayFolder _day;
    readonly RunFile _run;
    readonly IReadOnlyList<InputFile> _inputs;
    readonly string _fingerprint, _reader;

    /// <param name="lab">Configuration.</param>
    /// <param name="day">The day.</param>
    /// <param name="run">The run.</param>
    /// <param name="results">Folder of the day's results.</param>
    /// <exception cref="DataFaultException">An input file is missing or cannot be used.</exception>
    public RunWork(LabConfiguration lab, DayFolder day, RunFile run, string results)
    {
        (_lab, _day, _run, Folder) = (lab, day, run, Path.Combine(results, run.Name));
        _setup = lab.SetupFor(run.Rule);
        _settings = ForMode(lab.Analysis, run.Rule.Mode);
        string zero = "";
        if (run.Rule.ZeroFrom is { } pattern && run.Rule.Mode != TransverseFitter.Mode)
        {
            (Quantities.Measured value, RunWork across) = ZeroOf(pattern, results);
            _setup = _setup with { Probe = _setup.Probe with { AxisZero = value } };
            (zero, _zeroInputs) = (across._fingerprint, [.. across._inputs]);
        }
        using (IShotSource source = ShotFiles.Open(run.Path, run.Layout, _setup.Detector.Kind))
        {
            _inputs = [.. source.InputFiles.Select(f => Hashes.Of(day.Path, f))];
            _reader = source.Reader;
        }
        string all = string.Join('\n', [.. _inputs.Select(i => $"{i.Name} {i.Sha256}"), lab.Digest, ProgramVersion.Text, $"{RunAnalysis.NumericalVersion}", $"{run.Rule}", zero]);
        _fingerprint = Convert.ToHexStringLower(SHA256.HashData(Encoding.UTF8.GetBytes(all)));
    }

    /// <summary>Folder of the run's results.</summary>
    public string Folder { get; }

    static AnalysisSettings ForMode(AnalysisSettings settings, string mode) =>
        RunAnalysis.IsScan(mode) ? settings with { Reduction = settings.Reduction with { ByPoint = true } } : settings;

    /// <summary>The zero of the frequency axis by the scan across the beam that is nearest before this run in the day.</summary>
    (Quantities.Measured Zero, RunWork Across) ZeroOf(string pattern, string results)
    {
        RunFile[] scans = [.. _day.Runs.Where(r => r.Rule.Mode == TransverseFitter.Mode && FileSystemName.MatchesSimpleExpression(pattern, r.Name, ignoreCase: false))];
        RunFile scan = scans.LastOrDefault(r => string.CompareOrdinal(r.Name, _run.Name) < 0) ?? scans.FirstOrDefault()
            ?? throw new DataFaultException(_run.Name, $"no scan across the beam \"{pattern}\"", $"a run of mode \"{TransverseFitter.Mode}\" with such a name in the day's folder", "record one, correct zero_from in night.toml, or state axis_zero of the probe");
        var across = new RunWork(_lab, _day, scan, results);
        SpectrumOutcome fit = across.Fit(across.Ingest(out _), out _)[0];
        Quantity zero = fit.Others.Single(o => o.Name == TransverseFitter.FrequencyZero).Quantity;
        return zero.NotDeterminedBecause is { } because ? throw new DataFaultException(scan.Name, $"a frequency zero that is not determined: {because}", "a clear scan across the beam", "record it again with more shots")
            : (new Quantities.Measured(zero.Value, zero.Total), across);
    }

    /// <summary>Shots to sums.</summary>
    public BinnedRun Ingest(out bool reused)
    {
        // a scan across the beam may be asked for by several runs at once
        lock (Locks.GetOrAdd(Folder, _ => new Lock())) return IngestAlone(out reused);
    }

    BinnedRun IngestAlone(out bool reused)
    {
        BinnedRun? known = ReducedFile.Read(Folder, _fingerprint);
        reused = known is not null;
        if (known is not null) return known;
        using IShotSource source = ShotFiles.Open(_run.Path, _run.Layout, _setup.Detector.Kind);
        BinnedRun run = Reducer.Reduce(source.Shape, source.Shots, source.ReadBlocks(), _setup.Detector, _settings.Reduction);
        ReducedFile.Write(Folder, _fingerprint, run);
        return run;
    }

    /// <summary>What this run brings to a joint fit.</summary>
    internal (JointMember Member, RunPart Part) ForJoint(string condition)
    {
        BinnedRun run = Ingest(out _);
        return (new JointMember(_run.Name, run, condition, _setup, _run.Rule.Mode), new RunPart(_fingerprint, [.. _inputs, .. _zeroInputs], _reader));
    }

    /// <summary>Sums to spectra and numbers.</summary>
    public IReadOnlyList<SpectrumOutcome> Fit(BinnedRun run, out bool reused)
    {
        lock (Locks.GetOrAdd(Folder, _ => new Lock())) return FitAlone(run, out reused);
    }

    IReadOnlyList<SpectrumOutcome> FitAlone(BinnedRun run, out bool reused)
    {
        IReadOnlyList<SpectrumOutcome>? known = StageFiles.ReadFits(Folder, _fingerprint);
        reused = known is not null;
        if (known is not null) return known;
        IReadOnlyList<SpectrumOutcome> fits = WithUncut(run, RunAnalysis.Fit(run, _run.Rule.Mode, _setup, _settings));
        StageFiles.WriteFits(Folder, _fingerprint, fits);
        return fits;
    }

    /// <summary>Spectra and predictions to the verdict, and all result files.</summary>
    public RunOutcome Compare(BinnedRun run, IReadOnlyList<SpectrumOutcome> fits)
    {
        var predictions = new Dictionary<string, ConditionPrediction>(StringComparer.Ordinal);
        var files = new List<InputFile>();
        foreach (string condition in run.Conditions)
            if (_run.Rule.Mode != TransverseFitter.Mode && RuleFor(condition) is { } rule)
            {
                string path = Path.Combine(_day.Path, rule.File);
                MoleculeList molecules = MoleculeFiles.Read(path, _lab.MoleculeLayouts[rule.Layout], rule.Weighting);
                predictions[condition] = new ConditionPrediction(molecules, rule.Normalisation == Normalisation.Relative);
                files.Add(Hashes.Of(_day.Path, path));
            }
        (IReadOnlyList<ConditionOutcome> conditions, Comparison.Verdict verdict) = RunAnalysis.Compare(fits, predictions, _setup, _settings);
        var outcome = new RunOutcome
        {
            Name = _run.Name, Mode = _run.Rule.Mode, Tally = ShotTally.Of(run), Conditions = conditions, Verdict = verdict,
            Remarks = [.. run.Remarks, .. fits.SelectMany(f => f.Remarks).Distinct(StringComparer.Ordinal)],
            Provenance = new Provenance
            {
                Inputs = [.. _inputs, .. _zeroInputs], Predictions = files, Configuration = _lab.Digest, Program = ProgramVersion.Text,
                NumericalVersion = RunAnalysis.NumericalVersion, Seed = _lab.Analysis.Fit.Seed, Reader = _reader,
            },
        };
        RunResults.Write(Folder, outcome);
        return outcome;
    }

    /// <summary>Where more than 2 % of the shots were cut, a remark says what the numbers would be with all of them.</summary>
    IReadOnlyList<SpectrumOutcome> WithUncut(BinnedRun run, IReadOnlyList<SpectrumOutcome> fits)
    {
        double share = (double)run.Cuts.Sum(c => c.Numbers.Count) / run.ShotsRead;
        if (share <= ManyCuts) return fits;
        using IShotSource source = ShotFiles.Open(_run.Path, _run.Layout, _setup.Detector.Kind);
        BinnedRun uncut = Reducer.Reduce(source.Shape, source.Shots, source.ReadBlocks(), _setup.Detector, _settings.Reduction.WithoutCuts());
        IReadOnlyList<SpectrumOutcome> all = RunAnalysis.Fit(uncut, _run.Rule.Mode, _setup, _settings);
        return [.. fits.Select(f => f with { Remarks = [.. f.Remarks, UncutRemark(share, f, all.FirstOrDefault(a => a.Signal.Condition == f.Signal.Condition))] })];
    }

    static string UncutRemark(double share, SpectrumOutcome cut, SpectrumOutcome? all) => string.Create(System.Globalization.CultureInfo.InvariantCulture,
        $"{cut.Signal.Condition}: {100 * share:F1} % of the shots of the run were cut; with all of them the number would be {(all is null ? "not determined" : Numbers.WithTotal(all.Number))} a shot and the mean velocity {(all is null ? "not determined" : Numbers.WithTotal(all.Mean))} m/s");

    PredictionRule? RuleFor(string condition) => _lab.Predictions.FirstOrDefault(p =>
        p.Condition == condition && FileSystemName.MatchesSimpleExpression(p.Runs, _run.Name, ignoreCase: false));
}

/// <summary>Version of the program as it stands in results.</summary>
static class ProgramVersion
{
    public static string Text { get; } = $"arrivals {typeof(ProgramVersion).Assembly.GetName().Version?.ToString(3)}";
}
