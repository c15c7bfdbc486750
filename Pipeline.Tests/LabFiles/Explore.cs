using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Fitting;
using Pipeline.Ingest;
using Pipeline.Predictions;
using Pipeline.Reduction;
using Xunit.Abstractions;
namespace Pipeline.Tests.LabFiles;
public class Explore(ITestOutputHelper o)
{
    [Fact]
    public void Free()
    {
        var lab = new LabFile("free-L1");
        var s = LabFile.Settings();
        var sw = System.Diagnostics.Stopwatch.StartNew();
        var run = lab.Reduce("arrival.h5", LabFile.Matrix, s);
        o.WriteLine($"reduce {sw.ElapsedMilliseconds} bins {run.Axis.Bins}"); foreach (var c in run.Cuts) o.WriteLine(c.Reason + string.Join(',', c.Numbers));
        foreach (var est in new[]{"unfolded"}) foreach (var bg in new[]{"steady","templates"}) {
        sw.Restart();
        var st = LabFile.Settings(bg, est);
        var fits = RunAnalysis.Fit(run, "arrival", lab.Setup(), st);
        o.WriteLine($"--- {bg} fit {sw.ElapsedMilliseconds} ms");
        Show(fits[0]); }
    }
    void Show(SpectrumOutcome f)
    {
        o.WriteLine($"B total {f.Signal.Background.Sum():F0} T {f.Signal.Total.Sum():F0} yieldscatter {f.YieldScatter}");
        foreach (var sp in f.Spectra)
        {
            o.WriteLine($"{sp.Estimator}: N {sp.Number.Value:F1} {sp.Number.Statistical:F1} {sp.Number.Systematic:F1} mean {sp.Mean.Value:F2} {sp.Mean.Statistical:F2} {sp.Mean.Systematic:F2} spread {sp.Spread.Value:F2} {sp.Spread.Statistical:F2} {sp.Spread.Systematic:F2} dev {sp.Deviance:F1}/{sp.DegreesOfFreedom:F1} {sp.Description} {sp.Doubt}");
            foreach (var b in sp.Number.Budget.Zip(sp.Mean.Budget)) o.WriteLine($"   {b.First.Cause}: {b.First.Shift:F2}  {b.Second.Shift:F3}");
        }
        o.WriteLine($"below {f.Below.Value:F3} [{f.Below.Interval?.Low:F3}, {f.Below.Interval?.High:F3}] {f.Below.NotDeterminedBecause}");
        foreach (var r in f.Remarks) o.WriteLine(r);
    }
    [Fact]
    public void Model()
    {
        var lab = new LabFile("model-L1");
        var s = LabFile.Settings();
        var run = lab.Reduce("arrival.h5", LabFile.Matrix, s);
        var fits = RunAnalysis.Fit(run, "arrival", lab.Setup(), s);
        foreach (var f in fits) Show(f);
        var sw = System.Diagnostics.Stopwatch.StartNew();
        var p = MoleculeFiles.Read(Path.Combine(lab.Folder, "prediction.csv"), LabFile.Molecules, MoleculeWeighting.Crossings);
        o.WriteLine($"read {sw.ElapsedMilliseconds}"); sw.Restart();
        var (c, v) = RunAnalysis.Compare(fits, new Dictionary<string, ConditionPrediction> { ["on"] = new(p, false) }, lab.Setup(), s);
        o.WriteLine($"compare {sw.ElapsedMilliseconds}");
        foreach (var x in c) if (x.Prediction is {} q) o.WriteLine($"pred N {q.Molecules} mean {q.MeanSpeed} below {q.BelowCapture} neff {q.EffectiveSize} out {q.Outside}");
        o.WriteLine(v.Judgement.ToString()); foreach (var qn in v.Questions) o.WriteLine(qn.Reason + $" stat {qn.Answer.Statistical} syst {qn.Answer.Systematic} sim {qn.Answer.Simulation} p {qn.Answer.PValue}");
    }
}
