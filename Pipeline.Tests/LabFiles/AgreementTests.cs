using Pipeline.Analysis;
using Pipeline.Fitting;
using Pipeline.Ingest;
using Pipeline.Quantities;
using Pipeline.Reduction;

namespace Pipeline.Tests.LabFiles;

/// <summary>The same beam by its arrival times, with the laser across, and by its Doppler shifts, with the laser at 45 degrees.</summary>
public class AgreementTests
{
    [SkippableFact]
    public void Fit_SameBeamByArrivalAndByDoppler_Agrees()
    {
        var lab = new LabFile("model-L1");
        AnalysisSettings settings = LabFile.Settings();
        SpectrumOutcome arrival = Free(lab.Reduce("arrival.h5", LabFile.Matrix, settings), "arrival", settings);
        ShotFileLayout layout = (Hdf5MatrixLayout)LabFile.Matrix with { Shots = LabFile.Matrix.Shots with { Point = "shots/point" } };
        var scanned = new AnalysisSettings { Background = settings.Background, Comparison = settings.Comparison, Fit = settings.Fit, Reduction = settings.Reduction with { UnlockedBeyondHz = null, ByPoint = true } };
        SpectrumOutcome doppler = Free(lab.Reduce("doppler.h5", layout, scanned), "doppler", scanned);
        Agree("number", doppler.Number, arrival.Number);
        Agree("mean velocity", doppler.Mean, arrival.Mean);
        // a comparison that could not fail would pass the lines above
        Assert.InRange(ConditionRatios.Ratio(doppler.Number, arrival.Number).Total, 0, 0.15);
        Assert.InRange(ConditionRatios.Ratio(doppler.Mean, arrival.Mean).Total, 0, 0.04);

        SpectrumOutcome Free(BinnedRun run, string mode, AnalysisSettings with) =>
            RunAnalysis.Fit(run with { Groups = [.. run.Groups.Where(g => g.Condition == "off")] }, mode, mode == "arrival" ? lab.Setup() : lab.ScanSetup(default), with).Single();
    }

    /// <summary>Within three standard errors of their ratio, in which what both rest on cancels: efficiency, saturation, width of the probe.</summary>
    static void Agree(string what, Quantity a, Quantity b)
    {
        Quantity ratio = ConditionRatios.Ratio(a, b);
        Assert.True(Math.Abs(ratio.Value - 1) <= 3 * ratio.Total, $"{what}: {a.Value:G5} ± {a.Total:G2} and {b.Value:G5} ± {b.Total:G2}, ratio {ratio.Value:F3} ± {ratio.Total:F3}");
    }
}
