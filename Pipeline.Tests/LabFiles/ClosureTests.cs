using System.Text.Json;
using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Ingest;
using Pipeline.Predictions;
using Pipeline.Reduction;

namespace Pipeline.Tests.LabFiles;

/// <summary>The whole chain on files of a generator that shares nothing with this project.</summary>
public class ClosureTests
{
    [SkippableTheory]
    [InlineData("free-L1", "arrival.h5", true)]
    [InlineData("free-L4", "arrival.csv", false)]
    public void Fit_FreeFlight_GivesTrueNumberAndMeanVelocity(string folder, string file, bool matrix)
    {
        var lab = new LabFile(folder);
        AnalysisSettings settings = LabFile.Settings();
        BinnedRun run = lab.Reduce(file, matrix ? LabFile.Matrix : LabFile.Wide, settings);
        SpectrumOutcome fit = RunAnalysis.Fit(run, "arrival", lab.Setup(), settings).Single();
        JsonElement truth = lab.Truth.GetProperty("off");
        AssertWithin(fit.Number, truth.GetProperty("number_per_shot_expected").GetDouble());
        AssertWithin(fit.Mean, truth.GetProperty("mean_velocity_m_per_s").GetDouble());
        double below = truth.GetProperty("number_below").GetProperty("expected").GetDouble();
        Assert.True(fit.Below.Interval!.Value.Contains(below), $"{fit.Below.Interval} should hold {below}");
        // a number that could be anything would pass the lines above
        Assert.InRange(fit.Number.Total / fit.Number.Value, 0, 0.12);
        Assert.InRange(fit.Mean.Total, 0, 1.0);
    }

    [SkippableTheory]
    [InlineData("steady")]
    [InlineData("templates")]
    public void Fit_EachBackground_GivesTrueNumberAndMeanVelocity(string background)
    {
        var lab = new LabFile("free-L1");
        AnalysisSettings settings = LabFile.Settings(background);
        SpectrumOutcome fit = RunAnalysis.Fit(lab.Reduce("arrival.h5", LabFile.Matrix, settings), "arrival", lab.Setup(), settings).Single();
        AssertWithin(fit.Number, lab.Truth.GetProperty("off").GetProperty("number_per_shot_expected").GetDouble());
        AssertWithin(fit.Mean, lab.Truth.GetProperty("off").GetProperty("mean_velocity_m_per_s").GetDouble());
    }

    [SkippableFact]
    public void Fit_SameRunInTwoLayouts_GivesIdenticalSpectra()
    {
        AnalysisSettings settings = LabFile.Settings();
        LabFile first = new("free-L1"), second = new("free-L4");
        BinnedRun matrix = first.Reduce("arrival.h5", LabFile.Matrix, settings), wide = second.Reduce("arrival.csv", LabFile.Wide, settings);
        Assert.Equal(matrix.Axis.Edges, wide.Axis.Edges);
        foreach ((ShotGroup a, ShotGroup b) in matrix.Groups.Zip(wide.Groups)) Assert.Equal(a.BlockSums, b.BlockSums);
        SpectrumOutcome a1 = RunAnalysis.Fit(matrix, "arrival", first.Setup(), settings).Single(), b1 = RunAnalysis.Fit(wide, "arrival", second.Setup(), settings).Single();
        Assert.Equal(a1.Spectra[0].Molecules, b1.Spectra[0].Molecules);
        Assert.Equal(a1.Number.Statistical, b1.Number.Statistical);
    }

    [SkippableFact]
    public void Reduce_RunWithBadShots_CutsExactlyThese()
    {
        BinnedRun run = new LabFile("free-L1").Reduce("arrival.h5", LabFile.Matrix, LabFile.Settings());
        Assert.Equal([11L], run.Cuts.Single(c => c.Reason == "missing trigger").Numbers);
        Assert.Equal([23L], run.Cuts.Single(c => c.Reason == "probe unlocked").Numbers);
        Assert.Equal(60, run.ShotsRead);
        Assert.Equal(58, run.Groups.Sum(g => g.Shots));
    }

    [SkippableFact]
    public void Fit_AnalogDetector_CutsBadShotsAndGivesTrueNumberAndMeanVelocity()
    {
        var lab = new LabFile("analog-L1");
        AnalysisSettings counting = LabFile.Settings("templates");
        var settings = new AnalysisSettings
        {
            Background = "templates", Comparison = counting.Comparison,
            Fit = new FitSettings { FromSeconds = 1.0e-3, VelocityFrom = 5, VelocityTo = 301, VelocityStep = 3 },
            Reduction = new ReductionSettings { ShotsPerBlock = 5, UnlockedBeyondHz = 100e6, TriggerMarkWithinSeconds = 0.3e-3 },
        };
        ShotFileLayout layout = (Hdf5MatrixLayout)LabFile.Matrix with { Meaning = SampleMeaning.Instant, LowestCode = -8192, HighestCode = 8191 };
        BinnedRun run = lab.Reduce("arrival.h5", layout, settings);
        Assert.Equal([50L], run.Cuts.Single(c => c.Reason == "missing trigger").Numbers);
        Assert.Equal([33L], run.Cuts.Single(c => c.Reason == "probe unlocked").Numbers);
        Assert.Equal([14L], run.Cuts.Single(c => c.Reason == "saturated").Numbers);
        Assert.Contains(run.Remarks, r => r.StartsWith("photon-transfer line: gain", StringComparison.Ordinal) && !r.Contains("WARNING", StringComparison.Ordinal));
        SpectrumOutcome fit = RunAnalysis.Fit(run, "arrival", lab.Setup(), settings).Single();
        JsonElement truth = lab.Truth.GetProperty("off");
        AssertWithin(fit.Number, truth.GetProperty("number_per_shot_expected").GetDouble());
        AssertWithin(fit.Mean, truth.GetProperty("mean_velocity_m_per_s").GetDouble());
        Assert.InRange(fit.Number.Total / fit.Number.Value, 0, 0.12);
        Assert.InRange(fit.Mean.Total, 0, 1.5);
        // without the time constant of the detector the beam would come out 50 us late, 2.6 m/s too slow
        Setup blind = lab.Setup();
        blind = blind with { Detector = blind.Detector with { TimeConstant = default } };
        Assert.InRange(fit.Mean.Value - RunAnalysis.Fit(run, "arrival", blind, settings).Single().Mean.Value, 1.5, 4);
    }

    [SkippableFact]
    public void Compare_AgreeingModel_Agrees()
    {
        (SpectrumOutcome on, Verdict verdict) = Compare(1, 1);
        Assert.Equal(Judgement.Agrees, verdict.Judgement);
        Assert.Equal(["rate", "arrival time", "shape"], verdict.Questions.Select(q => q.Answer.Question));
        Assert.NotNull(on.NotDeterminedBecause);
        Assert.True(double.IsNaN(on.Number.Value));
    }

    [SkippableTheory]
    [InlineData(1.5, 1, "rate")]
    [InlineData(1, 1.06, "arrival time")]
    public void Compare_WrongModel_DisagreesAndSaysInWhat(double weight, double time, string question)
    {
        (_, Verdict verdict) = Compare(weight, time);
        Assert.Equal(Judgement.Disagrees, verdict.Judgement);
        Assert.Contains(verdict.Questions, q => q.Answer.Question == question && q.Judgement == Judgement.Disagrees);
    }

    /// <summary>model-L1, decelerator on, against its prediction with weights and times multiplied.</summary>
    static (SpectrumOutcome On, Verdict Verdict) Compare(double weight, double time)
    {
        var lab = new LabFile("model-L1");
        AnalysisSettings settings = LabFile.Settings();
        BinnedRun run = lab.Reduce("arrival.h5", LabFile.Matrix, settings);
        run = run with { Groups = [.. run.Groups.Where(g => g.Condition == "on")] };
        IReadOnlyList<SpectrumOutcome> fits = RunAnalysis.Fit(run, "arrival", lab.Setup(), settings);
        MoleculeList m = MoleculeFiles.Read(Path.Combine(lab.Folder, "prediction.csv"), LabFile.Molecules, MoleculeWeighting.Crossings);
        var changed = new MoleculeList([.. m.Time.Select(t => t * time)], m.Z, [.. m.Vz.Select(v => v / time)], m.X, m.Y, m.Vx, m.Vy, [.. m.Weight.Select(w => w * weight)], m.Weighting);
        var predictions = new Dictionary<string, ConditionPrediction>(StringComparer.Ordinal) { ["on"] = new(changed, RelativeOnly: false) };
        return (fits.Single(), RunAnalysis.Compare(fits, predictions, lab.Setup(), settings).Verdict);
    }

    static void AssertWithin(Quantity quantity, double truth) =>
        Assert.True(Math.Abs(quantity.Value - truth) <= 3 * quantity.Total, $"{quantity.Value:G6} ± {quantity.Total:G3} is not within 3 standard errors of {truth:G6}");
}
