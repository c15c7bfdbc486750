using System.Text.Json;
using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Fitting;
using Pipeline.Ingest;
using Pipeline.Quantities;
using Pipeline.Reduction;

namespace Pipeline.Tests.LabFiles;

/// <summary>The Doppler scan of a lab whose truth is known: zero of the axis from the scan across the beam, then numbers and velocities.</summary>
public class DopplerTests
{
    static readonly AnalysisSettings Plain = LabFile.Settings();

    static readonly AnalysisSettings Settings = new()
    {
        Reduction = new ReductionSettings { ShotsPerBlock = 5, UnlockedBeyondHz = 100e6, ByPoint = true },
        Background = "steady", Comparison = Plain.Comparison,
        Fit = new FitSettings { FromSeconds = 0.8e-3, VelocityFrom = 5, VelocityTo = 301, VelocityStep = 3, Replicas = 200 },
    };

    static readonly ShotFileLayout Layout = (Hdf5MatrixLayout)LabFile.Matrix with { Shots = LabFile.Matrix.Shots with { Point = "shots/point" } };

    [SkippableFact]
    public void Fit_ScanAcrossTheBeam_FindsTheZero()
    {
        SpectrumOutcome across = Across(new LabFile("doppler-L1"));
        Quantity zero = Named(across, TransverseFitter.FrequencyZero), spread = Named(across, "transverse speed spread");
        Assert.InRange(zero.Value, 6.3e6 - 3 * zero.Total, 6.3e6 + 3 * zero.Total);
        Assert.InRange(zero.Total, 0.2e6, 2e6);
        // 1.4 MHz beside a line of 12 MHz: bounded from above
        Assert.Contains("at most", spread.NotDeterminedBecause, StringComparison.Ordinal);
        Assert.NotNull(across.NotDeterminedBecause);
    }

    [SkippableTheory]
    [InlineData("off", "doppler")]
    [InlineData("on", "doppler")]
    [InlineData("off", "map")]
    public void Fit_Scan_GivesTrueNumberAndMeanVelocity(string condition, string mode)
    {
        var lab = new LabFile("doppler-L1");
        Quantity zero = Named(Across(lab), TransverseFitter.FrequencyZero);
        BinnedRun run = lab.Reduce("doppler.h5", Layout, Settings);
        Assert.Equal([197L, 386], run.Cuts.Single(c => c.Reason == "probe unlocked").Numbers);
        run = run with { Groups = [.. run.Groups.Where(g => g.Condition == condition)] };
        SpectrumOutcome fit = RunAnalysis.Fit(run, mode, lab.ScanSetup(new Measured(zero.Value, zero.Total)), Settings).Single();
        JsonElement truth = lab.Truth.GetProperty(condition);
        Within(fit.Number, truth.GetProperty("number_per_shot_expected").GetDouble());
        Within(fit.Mean, truth.GetProperty("mean_velocity_m_per_s").GetDouble());
        Assert.InRange(fit.Number.Total / fit.Number.Value, 0, 0.15);
        Assert.InRange(fit.Mean.Total, 0, 4.5);
        if (condition == "on")
        {
            double below = truth.GetProperty("number_below").GetProperty("expected").GetDouble();
            Assert.InRange(below, fit.Below.Interval!.Value.Low, fit.Below.Interval.Value.High);
        }
    }

    static SpectrumOutcome Across(LabFile lab)
    {
        BinnedRun run = lab.Reduce("transverse.h5", Layout, Settings);
        return RunAnalysis.Fit(run, TransverseFitter.Mode, lab.ScanSetup(default, across: true), Settings).Single();
    }

    static Quantity Named(SpectrumOutcome outcome, string name) => outcome.Others.Single(o => o.Name == name).Quantity;

    static void Within(Quantity quantity, double truth) =>
        Assert.True(Math.Abs(quantity.Value - truth) <= 3 * quantity.Total, $"{quantity.Value:G6} ± {quantity.Statistical:G3} ± {quantity.Systematic:G3} is not within 3 standard errors of {truth:G6}");
}
