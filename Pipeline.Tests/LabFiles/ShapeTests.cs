using System.Text.Json;
using Pipeline.Analysis;
using Pipeline.Fitting;

namespace Pipeline.Tests.LabFiles;

/// <summary>Shapes on a file of a generator that shares nothing with this project.</summary>
public class ShapeTests
{
    [SkippableFact]
    public void Fit_Spline_AgreesWithUnfoldedAndTruth()
    {
        (VelocitySpectrum shape, VelocitySpectrum unfolded, JsonElement truth) = Fit("spline");
        Assert.Equal(unfolded.Number.Value, shape.Number.Value, 0.01 * unfolded.Number.Value);
        Assert.Equal(unfolded.Mean.Value, shape.Mean.Value, 0.5);
        Assert.InRange(truth.GetProperty("mean_velocity_m_per_s").GetDouble(), shape.Mean.Value - 3 * shape.Mean.Total, shape.Mean.Value + 3 * shape.Mean.Total);
        Assert.InRange(truth.GetProperty("number_per_shot_expected").GetDouble(), shape.Number.Value - 3 * shape.Number.Total, shape.Number.Value + 3 * shape.Number.Total);
        // cell by cell, where the beam is: half of the peak
        double peak = unfolded.Molecules.Max();
        double[] off = [.. shape.Molecules.Zip(unfolded.Molecules, (a, b) => Math.Abs(a - b) / peak)];
        Assert.InRange(off.Max(), 0, 0.15);
    }

    /// <summary>The generator adds 3 % of slow molecules (u = 25, alpha = 25 m/s) to a beam of u = 150, alpha = 30 m/s. One beam has a deviance that is not
    /// suspicious by itself: only the comparison shows the slow ones.</summary>
    [SkippableFact]
    public void Fit_Best_FindsBothBeamsOfTheGenerator()
    {
        (VelocitySpectrum shape, _, _) = Fit("best");
        Assert.Equal(ShapeNames.All.SkipLast(1), shape.Choices.Select(c => c.Family));
        Assert.Equal("two-beams", shape.Choices.Single(c => c.Chosen).Family);
        Assert.Null(shape.Doubt);
        foreach ((int k, double truth) in ((int, double)[])[(1, 25), (2, 25), (4, 150), (5, 30)])
        {
            ShapeParameter found = shape.Parameters[k];
            Assert.InRange(truth, found.Value - 3 * (found.Value - found.Low), found.Value + 3 * (found.High - found.Value));
        }
    }

    static (VelocitySpectrum Shape, VelocitySpectrum Unfolded, JsonElement Truth) Fit(string shape)
    {
        var lab = new LabFile("free-L1");
        AnalysisSettings settings = LabFile.Settings("templates");
        settings = settings with { Fit = settings.Fit with { Shape = shape, Replicas = 50 } };
        SpectrumOutcome fit = RunAnalysis.Fit(lab.Reduce("arrival.h5", LabFile.Matrix, settings), "arrival", lab.Setup(), settings).Single();
        return (fit.Spectra.Single(s => s.Estimator == "shape"), fit.Spectra.Single(s => s.Estimator == "unfolded"), lab.Truth.GetProperty("off"));
    }
}
