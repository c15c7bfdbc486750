using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Fitting;
using Pipeline.Quantities;
using Pipeline.Reduction;
using SampleDay;

namespace Pipeline.Tests.Ensembles;

/// <summary>Shots made molecule by molecule, as a reduced run.</summary>
static class MadeShots
{
    /// <summary>Runs of an ensemble; ARRIVALS_ENSEMBLE=400 makes the full one.</summary>
    public static int Runs { get; } = int.TryParse(Environment.GetEnvironmentVariable("ARRIVALS_ENSEMBLE"), out int n) ? n : 24;

    /// <summary>The apparatus without uncertainty: only statistical errors are at work, and no responses are built for others.</summary>
    public static Setup Exact(Setup setup) => Nuisances.Of(setup).Aggregate(setup, (s, n) => n.Replace(s, new Measured(n.Value(s)!.Value.Value)));

    /// <summary>A made run, reduced and fitted.</summary>
    public static IReadOnlyList<SpectrumOutcome> Fit(Scene scene, Beam beam, RunPlan plan, int seed, string mode, Setup setup, AnalysisSettings settings) =>
        RunAnalysis.Fit(Reduce(Simulate.Run(scene, beam, plan, seed), plan, setup, settings), mode, setup, settings);

    public static BinnedRun Reduce(IReadOnlyList<Shot> shots, RunPlan plan, Setup setup, AnalysisSettings settings)
    {
        var shape = new RecordShape { Shots = shots.Count, Samples = plan.Samples, OriginSeconds = plan.Start, TickSeconds = plan.Step, Kind = DetectorKind.Counting };
        ShotInfo[] infos = Infos(shots);
        int[] codes = [.. shots.SelectMany(s => s.Counts.Select(c => (int)c))];
        return Reducer.Reduce(shape, infos, [new ShotBlock(0, infos, codes)], setup.Detector, settings.Reduction);
    }

    public static ShotInfo[] Infos(IReadOnlyList<Shot> shots) =>
        [.. shots.Select(s => new ShotInfo(s.Number, (ShotKind)s.Kind, s.Condition, s.ProbeMonitor, s.AblationMonitor, s.Detuning) { Point = s.Point })];
}
