using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Ingest;
using Pipeline.Predictions;
using Pipeline.Quantities;
using Pipeline.Reduction;

namespace Pipeline.Tests.LabFiles;

/// <summary>The Doppler run of the beam whose arrival run <see cref="ClosureTests"/> compares with the same prediction.</summary>
public class ModelScanTests
{
    [SkippableFact]
    public void Compare_AgreeingModel_Agrees()
    {
        (SpectrumOutcome on, Verdict verdict) = Compare(1, 1, 0.10);
        Assert.Equal(["rate", "velocity", "shape"], verdict.Questions.Select(q => q.Answer.Question));
        Assert.True(verdict.Judgement == Judgement.Agrees, string.Join("\n", verdict.Reasons));
        Assert.True(on.Number.Value > 0);
    }

    /// <remarks>With 5 % that matter the shape stays undecided: the run has few shots.</remarks>
    [SkippableFact]
    public void Compare_AgreeingModelAndFinerDemand_IsUndecidedForItsShapeOnly()
    {
        (_, Verdict verdict) = Compare(1, 1);
        Assert.Equal([Judgement.Agrees, Judgement.Agrees, Judgement.Undecided], verdict.Questions.Select(q => q.Judgement));
    }

    [SkippableTheory]
    [InlineData(1.5, 1, "rate")]
    [InlineData(1, 1.08, "velocity")]
    public void Compare_WrongModel_DisagreesAndSaysInWhat(double weight, double speed, string question)
    {
        (_, Verdict verdict) = Compare(weight, speed);
        Assert.Equal(Judgement.Disagrees, verdict.Judgement);
        Assert.Contains(verdict.Questions, q => q.Answer.Question == question && q.Judgement == Judgement.Disagrees);
    }

    /// <summary>model-L1, decelerator on, against its prediction with weights and velocities multiplied.</summary>
    static (SpectrumOutcome On, Verdict Verdict) Compare(double weight, double speed, double matters = 0.05)
    {
        var lab = new LabFile("model-L1");
        AnalysisSettings plain = LabFile.Settings();
        AnalysisSettings settings = new() { Reduction = plain.Reduction with { ByPoint = true }, Background = plain.Background, Comparison = plain.Comparison with { VelocityMatters = matters }, Fit = plain.Fit with { Replicas = 100 } };
        // the lab does not know the zero of its axis and took no scan across the beam; the generator used 0, taken here as known to 1 MHz
        Setup setup = lab.ScanSetup(new Measured(0, 1e6));
        BinnedRun run = lab.Reduce("doppler.h5", (Hdf5MatrixLayout)LabFile.Matrix with { Shots = LabFile.Matrix.Shots with { Point = "shots/point" } }, settings);
        run = run with { Groups = [.. run.Groups.Where(g => g.Condition == "on")] };
        IReadOnlyList<SpectrumOutcome> fits = RunAnalysis.Fit(run, "doppler", setup, settings);
        MoleculeList m = MoleculeFiles.Read(Path.Combine(lab.Folder, "prediction.csv"), LabFile.Molecules, MoleculeWeighting.Crossings);
        double[] Times(double[] values, double by) => [.. values.Select(x => x * by)];
        var changed = new MoleculeList(Times(m.Time, 1 / speed), m.Z, Times(m.Vz, speed), m.X, m.Y, Times(m.Vx, speed), Times(m.Vy, speed), Times(m.Weight, weight), m.Weighting);
        var predictions = new Dictionary<string, ConditionPrediction>(StringComparer.Ordinal) { ["on"] = new(changed, RelativeOnly: false) };
        return (fits.Single(), RunAnalysis.Compare(fits, predictions, setup, settings).Verdict);
    }
}
